#include "glyph.h"

#include <stdbool.h>
#include <stdint.h>

typedef struct range {
    uint32_t first, last;
} range;

/* Both tables are abridged from Unicode 14 (general category, EastAsianWidth.txt): enough to
 * set a mark under the right character. */
static const range zero_width[] = {
    {0x300, 0x36F},   {0x483, 0x489},   {0x591, 0x5BD},   {0x610, 0x61A},   {0x64B, 0x65F},
    {0x900, 0x902},   {0x93A, 0x93C},   {0xE31, 0xE31},   {0xE34, 0xE3A},   {0xE47, 0xE4E},
    {0x1AB0, 0x1AFF}, {0x1DC0, 0x1DFF}, {0x200B, 0x200D}, {0x2060, 0x2064}, {0x20D0, 0x20F0},
    {0xFE00, 0xFE0F}, {0xFE20, 0xFE2F}, {0xFEFF, 0xFEFF}, {0xE0100, 0xE01EF},
};
static const range double_width[] = {
    {0x1100, 0x115F},   {0x231A, 0x231B},   {0x2329, 0x232A},   {0x23E9, 0x23EC},
    {0x25FD, 0x25FE},   {0x2614, 0x2615},   {0x2648, 0x2653},   {0x26A1, 0x26A1},
    {0x2705, 0x2705},   {0x274C, 0x274C},   {0x2753, 0x2755},   {0x2757, 0x2757},
    {0x2B1B, 0x2B1C},   {0x2E80, 0x303E},   {0x3041, 0xA4CF},   {0xA960, 0xA97C},
    {0xAC00, 0xD7A3},   {0xF900, 0xFAFF},   {0xFE30, 0xFE6F},   {0xFF01, 0xFF60},
    {0xFFE0, 0xFFE6},   {0x17000, 0x18CFF}, {0x1B000, 0x1B2FB}, {0x1F200, 0x1F320},
    {0x1F32D, 0x1F335}, {0x1F337, 0x1F37C}, {0x1F37E, 0x1F393}, {0x1F3A0, 0x1F3CA},
    {0x1F3E0, 0x1F3F0}, {0x1F3F8, 0x1F43E}, {0x1F442, 0x1F4FC}, {0x1F4FF, 0x1F53D},
    {0x1F54B, 0x1F567}, {0x1F5FB, 0x1F64F}, {0x1F680, 0x1F6C5}, {0x1F6D0, 0x1F6DF},
    {0x1F6EB, 0x1F6FF}, {0x1F7E0, 0x1F7EB}, {0x1F90C, 0x1F9FF}, {0x1FA70, 0x1FAFF},
    {0x20000, 0x3FFFD},
};
/* What could move the cursor or turn the order of what follows round. */
static const range control[] = {
    {0x00, 0x1F}, {0x7F, 0x9F}, {0x200E, 0x200F}, {0x2028, 0x202E}, {0x2066, 0x2069},
};

#define IN(table, point) within(table, sizeof(table) / sizeof *(table), point)

static bool within(const range *table, size_t count, uint32_t point) {
    for (size_t i = 0; i < count && point >= table[i].first; i++)
        if (point <= table[i].last) return true;
    return false;
}

static bool continues(unsigned char byte) { return (byte & 0xC0) == 0x80; }

/* Decodes one character; returns its bytes, 0 where the text is no good UTF-8. */
static size_t decode(const char *text, size_t length, uint32_t *point) {
    static const uint32_t least[] = {0, 0, 0x80, 0x800, 0x10000};
    unsigned char lead = (unsigned char)text[0];
    size_t size = lead < 0x80 ? 1 : lead >= 0xF0 ? 4 : lead >= 0xE0 ? 3 : lead >= 0xC0 ? 2 : 0;
    if (!size || size > length || lead > 0xF4) return 0;
    *point = size == 1 ? lead : lead & (0x7Fu >> size);
    for (size_t i = 1; i < size; i++) {
        if (!continues((unsigned char)text[i])) return 0;
        *point = *point << 6 | ((unsigned char)text[i] & 0x3F);
    }
    bool surrogate = *point >= 0xD800 && *point < 0xE000;
    return *point < least[size] || *point > 0x10FFFF || surrogate ? 0 : size;
}

glyph glyph_at(const char *text, size_t length) {
    uint32_t point = 0;
    size_t size = decode(text, length, &point);
    glyph out = {text, size, size ? size : 1, 1};
    while (out.taken < length && continues((unsigned char)text[out.taken])) out.taken++;
    if (!size || out.taken != size || IN(control, point)) {
        out.bytes = "\xEF\xBF\xBD";
        out.length = 3;
    } else if (IN(zero_width, point)) {
        out.width = 0;
    } else if (IN(double_width, point)) {
        out.width = 2;
    }
    return out;
}
