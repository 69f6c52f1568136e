/* The formatter: whatever the layout, the same text comes out, and it means the same. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>

#include <cmocka.h>
#include <glob.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "anabranch.h"
#include "language/reader.h"

static char *formatted(const char *text) {
    char *out = NULL;
    size_t length;
    anb_context *context = anb_context_new();
    assert_non_null(context);
    if (anb_format(context, "test.anab", text, strlen(text), &out, &length) != ANB_OK)
        fail_msg("refused:\n%s", text);
    assert_int_equal(strlen(out), length);
    anb_context_free(context);
    return out;
}

static void gives(const char *text, const char *want) {
    char *out = formatted(text);
    assert_string_equal(out, want);
    anb_text_free(out);
}

static void test_blanks(void **state) {
    (void)state;
    gives("a--3.3pF--b", "a -- 3.3 pF -- b\n");
    gives("z=( 1+k ) * z0 /2^ n", "z = (1 + k)*z0/2^n\n");
    gives("n[ 2*k + 1 ]--r--n[k-1]", "n[2*k+1] -- r -- n[k-1]\n");
    gives("x = - 5 ohm\ny = a - -b", "x = -5 ohm\ny = a - -b\n");
    gives("line( z,90deg@f0 , loss=0.2dB/m )on( a,b )", "line(z, 90 deg @ f0, loss = 0.2 dB/m) on (a, b)\n");
    gives("y = 3 dB / m", "y = 3 dB / m\n"); /* a division, which `3 dB/m` is not */
    gives("y = 50 ohm /w", "y = 50 ohm/w\n");
    gives("r:50ohm+/-5%", "r: 50 ohm +/- 5%\n");
    gives("sweep 1GHz..2 GHz points   5", "sweep 1 GHz .. 2 GHz points 5\n");
    gives("tune x=1 ohm from[1 ohm,2 ohm]", "tune x = 1 ohm from [1 ohm, 2 ohm]\n");
    gives("z = [a,b]\ny = z[1]", "z = [a, b]\ny = z[1]\n");
    gives("a -- S1 . x -- b", "a -- S1.x -- b\n");
}

static void test_lines(void **state) {
    (void)state;
    gives("a -- r\n  -- b\nc = (1 +\n 2)", "a -- r -- b\nc = (1 + 2)\n");
    gives("\n\n\na = 1;;b = 2\n\n\n\nc = 3", "a = 1\nb = 2\n\nc = 3\n");
    gives("for k in 1..3{a--r--b;c=1}", "for k in 1 .. 3 {\n    a -- r -- b\n    c = 1\n}\n");
    gives("if a>1 {b=1}else if c {d=1}\nelse{e=1}",
          "if a > 1 {\n    b = 1\n} else if c {\n    d = 1\n} else {\n    e = 1\n}\n");
    gives("\xEF\xBB\xBFtitle \"x\"\r\n", "title \"x\"\n");
}

static void test_comments(void **state) {
    (void)state;
    gives("# head  \na = 1   # one\n\n# two\nb = 2", "# head\na = 1  # one\n\n# two\nb = 2\n");
    gives("a -- r # here\n -- b # there", "a -- r  # here\n    -- b  # there\n");
    gives("network x() { # why\n# inside\na -- r -- b\n} # end",
          "network x() {  # why\n    # inside\n    a -- r -- b\n}  # end\n");
    gives("z = [1, # one\n 2] # two", "z = [1,  # one\n    2]  # two\n");
}

static void test_long_lines(void **state) {
    (void)state;
    char *out =
        formatted("first_node -- line(50 ohm, 90 deg @ 1 GHz) -- second_node -- line(70 ohm, 45 deg @ 1 GHz, "
                  "loss = 0.1 dB) -- shunt 3.3 pF -- last_node");
    for (const char *line = out; *line; line = strchr(line, '\n') + 1)
        assert_true(strcspn(line, "\n") <= 100);
    char *again = formatted(out);
    assert_string_equal(again, out);
    anb_text_free(again);
    anb_text_free(out);
}

/* ---- the examples, their layout mangled --------------------------------------------------------------- */

static char *read_file(const char *path) {
    FILE *file = fopen(path, "rb");
    assert_non_null(file);
    char *text = calloc(1, 1 << 16);
    assert_non_null(text);
    assert_true(fread(text, 1, (1 << 16) - 1, file) > 0);
    fclose(file);
    return text;
}

/* The blanks between two tokens of one statement in another way each time: more, none where that is allowed,
 * or line ends inside brackets and after operators. */
static char *mangled(const char *text) {
    char *out = calloc(4, strlen(text) + 16), *to = out;
    uint32_t length = (uint32_t)strlen(text), at = 0;
    unsigned brackets = 0, turn = 0;
    anb__token before = {ANB__TOKEN_SEMICOLON, 0, 0, 0};
    assert_non_null(out);
    for (;; turn++) {
        anb__token token = anb__lex(text, length, at, true);
        bool comment = token.kind == ANB__TOKEN_COMMENT || before.kind == ANB__TOKEN_COMMENT;
        bool inside = brackets && !comment && before.kind != ANB__TOKEN_COMMA;
        bool operators = before.kind == ANB__TOKEN_DASHES || before.kind == ANB__TOKEN_IS;
        for (uint32_t i = 0; i < token.lines; i++) *to++ = '\n';
        bool was_apart = token.start > before.end;
        if (!token.lines && (inside || (operators && !comment)) && turn % 3 == 0 &&
            token.kind != ANB__TOKEN_LEFT_BRACKET && before.kind != ANB__TOKEN_NUMBER && was_apart)
            *to++ = '\n';
        if (was_apart || (token.kind == ANB__TOKEN_DASHES && turn % 2))
            to += sprintf(to, "%s", turn % 2 ? "  \t" : " ");
        memcpy(to, text + token.start, token.end - token.start);
        to += token.end - token.start;
        brackets += token.kind == ANB__TOKEN_LEFT_PARENTHESIS || token.kind == ANB__TOKEN_LEFT_BRACKET;
        brackets -= token.kind == ANB__TOKEN_RIGHT_PARENTHESIS || token.kind == ANB__TOKEN_RIGHT_BRACKET;
        if (token.kind == ANB__TOKEN_END) return out;
        before = token;
        at = token.end;
    }
}

static void test_examples(void **state) {
    glob_t found;
    (void)state;
    assert_int_equal(glob("netlists/*.anab", 0, NULL, &found), 0);
    assert_true(found.gl_pathc >= 12);
    for (size_t i = 0; i < found.gl_pathc; i++) {
        char *text = read_file(found.gl_pathv[i]), *once = formatted(text), *twice = formatted(once);
        char *other = mangled(text), *back = formatted(other);
        assert_string_equal(once, twice);
        assert_string_not_equal(text, other);
        if (strcmp(once, back)) fail_msg("%s comes back as\n%s", found.gl_pathv[i], back);
        anb_text_free(once);
        anb_text_free(twice);
        anb_text_free(back);
        free(text);
        free(other);
    }
    globfree(&found);
}

static void test_mistakes(void **state) {
    char *out = NULL;
    size_t length;
    (void)state;
    anb_context *context = anb_context_new();
    assert_int_equal(anb_format(context, "x", "a -- (", 6, &out, &length), ANB_INVALID);
    assert_null(out);
    assert_int_equal(anb_error_count(context), 1);
    anb_context_free(context);
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(test_blanks),   cmocka_unit_test(test_lines),
                                       cmocka_unit_test(test_comments), cmocka_unit_test(test_long_lines),
                                       cmocka_unit_test(test_examples), cmocka_unit_test(test_mistakes)};
    return cmocka_run_group_tests(tests, NULL, NULL) ? 1 : 0;
}
