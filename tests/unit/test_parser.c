/* The parser: the tree of every statement and operator, the ends of statements, and every mistake that it
 * tells, with its place. Trees are written as (kind name flags children...), numbers in base units with their
 * unit behind a colon. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>

#include <cmocka.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/text.h"
#include "language/parse.h"

typedef anb__tree *parse(anb__report *report, anb__names *names, anb__arena *arena, uint32_t source);

typedef struct parsed {
    anb__arena arena;
    anb__report report;
    anb__names names;
    anb__tree *tree;
} parsed;

/* The arena has no escape: these texts are small. */
static void parse_bytes(parsed *p, parse *rule, const char *text, size_t length) {
    memset(p, 0, sizeof *p);
    p->report.arena = p->names.arena = &p->arena;
    uint32_t source = anb__add_source(&p->report, "test.anab", text, (uint32_t)length);
    p->tree = rule(&p->report, &p->names, &p->arena, source);
    assert_non_null(p->tree);
}

/* ---- trees and messages as text ------------------------------------------------------------------- */

static const char *const kinds[ANB__TREE_KIND_COUNT] = {
    [ANB__TREE_ERROR] = "error",
    [ANB__TREE_PI] = "pi",
    [ANB__TREE_J] = "j",
    [ANB__TREE_C0] = "c0",
    [ANB__TREE_FREQUENCY] = "frequency",
    [ANB__TREE_LIST] = "list",
    [ANB__TREE_RANGE] = "..",
    [ANB__TREE_INDEX] = "index",
    [ANB__TREE_MEMBER] = "member",
    [ANB__TREE_CALL] = "call",
    [ANB__TREE_ARGUMENT] = "argument",
    [ANB__TREE_MINUS] = "minus",
    [ANB__TREE_ADD] = "+",
    [ANB__TREE_SUBTRACT] = "-",
    [ANB__TREE_MULTIPLY] = "*",
    [ANB__TREE_DIVIDE] = "/",
    [ANB__TREE_POWER] = "^",
    [ANB__TREE_LESS] = "<",
    [ANB__TREE_LESS_EQUAL] = "<=",
    [ANB__TREE_GREATER] = ">",
    [ANB__TREE_GREATER_EQUAL] = ">=",
    [ANB__TREE_EQUAL] = "==",
    [ANB__TREE_NOT_EQUAL] = "!=",
    [ANB__TREE_AND] = "and",
    [ANB__TREE_OR] = "or",
    [ANB__TREE_NOT] = "not",
    [ANB__TREE_AT] = "@",
    [ANB__TREE_TOLERANCE] = "+/-",
    [ANB__TREE_GROUP] = "group",
    [ANB__TREE_GROUND] = "ground",
    [ANB__TREE_OPEN] = "open",
    [ANB__TREE_SHORT] = "short",
    [ANB__TREE_CHAIN] = "--",
    [ANB__TREE_PARALLEL] = "||",
    [ANB__TREE_SHUNT] = "shunt",
    [ANB__TREE_LABELLED] = "label",
    [ANB__TREE_FILE] = "file",
    [ANB__TREE_TITLE] = "title",
    [ANB__TREE_INCLUDE] = "include",
    [ANB__TREE_DEFINE] = "define",
    [ANB__TREE_KIND] = "kind",
    [ANB__TREE_PARAMETERS] = "parameters",
    [ANB__TREE_PARAMETER] = "parameter",
    [ANB__TREE_ASSUME] = "assume",
    [ANB__TREE_TUNE] = "tune",
    [ANB__TREE_TUNE_WITHIN] = "tune-within",
    [ANB__TREE_TUNE_SERIES] = "tune-series",
    [ANB__TREE_TUNE_FROM] = "tune-from",
    [ANB__TREE_CASES] = "cases",
    [ANB__TREE_PORT] = "port",
    [ANB__TREE_PORT_NAMES] = "names",
    [ANB__TREE_AT_NODES] = "at-nodes",
    [ANB__TREE_PATH] = "path",
    [ANB__TREE_PLACE] = "place",
    [ANB__TREE_TERMINALS] = "terminals",
    [ANB__TREE_JOIN] = "join",
    [ANB__TREE_NETWORK] = "network",
    [ANB__TREE_BLOCK] = "block",
    [ANB__TREE_FOR] = "for",
    [ANB__TREE_IF] = "if",
    [ANB__TREE_SWEEP] = "sweep",
    [ANB__TREE_POINTS] = "points",
    [ANB__TREE_STEP] = "step",
    [ANB__TREE_PER_DECADE] = "per-decade",
    [ANB__TREE_SWEEP_AT] = "sweep-at",
    [ANB__TREE_REQUIRE] = "require",
    [ANB__TREE_AT_LEAST] = "at-least",
    [ANB__TREE_AT_MOST] = "at-most",
    [ANB__TREE_WITHIN] = "within",
    [ANB__TREE_OVER] = "over",
    [ANB__TREE_AT_FREQUENCY] = "at-frequency",
    [ANB__TREE_WEIGHT] = "weight",
    [ANB__TREE_DRIVE] = "drive",
};

static bool is_bare(const anb__tree *tree) {
    return (tree->kind >= ANB__TREE_PI && tree->kind <= ANB__TREE_FREQUENCY) ||
           (tree->kind >= ANB__TREE_GROUND && tree->kind <= ANB__TREE_SHORT) || tree->kind == ANB__TREE_ERROR;
}

static bool put_leaf(const anb__tree *tree, anb__text *out) {
    if (tree->kind == ANB__TREE_NUMBER) {
        anb__text_number(out, tree->number);
        if (!tree->unit) return true;
        anb__text_char(out, ':');
        anb__text_string(out, tree->unit->name);
    } else if (tree->kind == ANB__TREE_STRING) {
        anb__text_char(out, '\'');
        anb__text_string(out, tree->text);
        anb__text_char(out, '\'');
    } else if (tree->kind == ANB__TREE_NAME) {
        anb__text_string(out, tree->name->text);
    } else if (is_bare(tree)) {
        anb__text_string(out, kinds[tree->kind]);
    } else {
        return false;
    }
    return true;
}

static void put_flags(const anb__tree *tree, anb__text *out) {
    static const struct {
        int flag;
        const char *name;
    } flags[] = {{ANB__TREE_NORMAL, " normal"},
                 {ANB__TREE_SHARED, " shared"},
                 {ANB__TREE_HAS_IMPEDANCE, " z"},
                 {ANB__TREE_HAS_NODES, " at"},
                 {ANB__TREE_HAS_LABEL, " labelled"}};
    for (size_t i = 0; i < sizeof flags / sizeof *flags; i++)
        if (tree->flags & flags[i].flag) anb__text_string(out, flags[i].name);
}

static void put_tree(const anb__tree *tree, anb__text *out) {
    if (put_leaf(tree, out)) return;
    assert_non_null(kinds[tree->kind]);
    anb__text_char(out, '(');
    anb__text_string(out, kinds[tree->kind]);
    if (tree->name) {
        anb__text_char(out, ' ');
        anb__text_string(out, tree->name->text);
    }
    put_flags(tree, out);
    for (const anb__tree *child = tree->first; child; child = child->next) {
        anb__text_char(out, ' ');
        put_tree(child, out);
    }
    anb__text_char(out, ')');
}

/* The statements of a file with blanks between them, any other tree as it is. */
static void put_all(const anb__tree *tree, anb__text *out) {
    if (tree->kind != ANB__TREE_FILE) put_tree(tree, out);
    for (const anb__tree *child = tree->first; tree->kind == ANB__TREE_FILE && child; child = child->next) {
        if (child != tree->first) anb__text_char(out, ' ');
        put_tree(child, out);
    }
    anb__text_char(out, '\0');
}

/* line:column-column: text [code] | hint; the second column is one past the span. */
static void put_messages(const parsed *p, anb__text *out) {
    for (const anb__diagnostic *d = p->report.first; d; d = d->next) {
        uint32_t line, column, end_line, end_column;
        char text[600];
        anb__place(&p->report.sources.list[d->span.source], d->span.start, &line, &column);
        anb__place(&p->report.sources.list[d->span.source], d->span.end, &end_line, &end_column);
        assert_int_equal(line, end_line);
        snprintf(text, sizeof text, "%u:%u-%u: %s [%s]%s%s\n", line, column, end_column, d->text, d->code,
                 d->hint ? " | " : "", d->hint ? d->hint : "");
        anb__text_string(out, text);
    }
    anb__text_char(out, '\0');
}

static void check_bytes(parse *rule, const char *text, size_t length, const char *tree,
                        const char *messages) {
    parsed p;
    anb__text trees = {0}, said = {0};
    parse_bytes(&p, rule, text, length);
    put_all(p.tree, &trees);
    put_messages(&p, &said);
    assert_false(trees.failed || said.failed);
    if (strcmp(said.bytes, messages)) fail_msg("%s\nsays\n%swanted\n%s", text, said.bytes, messages);
    if (tree && strcmp(trees.bytes, tree)) fail_msg("%s\nis     %s\nwanted %s", text, trees.bytes, tree);
    anb__text_free(&trees);
    anb__text_free(&said);
    anb__arena_free(&p.arena);
}

/* Text and its tree, or text and its messages. */
typedef struct row {
    const char *text, *want;
} row;

#define COUNT(rows) (sizeof(rows) / sizeof *(rows))

static void trees(const row *rows, size_t count) {
    for (size_t i = 0; i < count; i++)
        check_bytes(anb__parse, rows[i].text, strlen(rows[i].text), rows[i].want, "");
}

static void mistakes(const row *rows, size_t count) {
    for (size_t i = 0; i < count; i++)
        check_bytes(anb__parse, rows[i].text, strlen(rows[i].text), NULL, rows[i].want);
}

/* ---- values -------------------------------------------------------------------------------------- */

static void numbers(void **state) {
    static const row rows[] = {
        {"a = 3", "(define a 3)"},
        {"a = .5", "(define a 0.5)"},
        {"a = 2.5e-3", "(define a 0.0025)"},
        {"a = 3.3 pF", "(define a 3.3e-12:pF)"},
        {"a = 3.3pF", "(define a 3.3e-12:pF)"},
        {"a = 90 deg", "(define a 0.25:deg)"},
        {"a = 5 inch", "(define a 0.127:inch)"},
        {"a = 50 ohm/w", "(define a (/ 50:ohm w))"},
        {"a = 0.5 dB/m", "(define a 0.5:dB/m)"},
        {"a = 3 dB / m", "(define a (/ 3:dB m))"},
        {"a = 5%", "(define a 0.05:%)"},
        {"a = 1 .. 8", "(define a (.. 1 8))"},
        {"a = 1..8", "(define a (.. 1 8))"},
        {"a = 5 \xCE\xBCm", "(define a 5e-06:um)"},
        {"a = 5 \xC2\xB5m", "(define a 5e-06:um)"},
    };
    (void)state;
    trees(rows, COUNT(rows));
}

static void primaries(void **state) {
    static const row rows[] = {
        {"a = b", "(define a b)"},
        {"a = pi*j*c0*frequency", "(define a (* (* (* pi j) c0) frequency))"},
        {"a = (b)", "(define a (group b))"},
        {"a = []", "(define a (list))"},
        {"a = [1, b, [2]]", "(define a (list 1 b (list 2)))"},
        {"a = b[k + 1][2]", "(define a (index (index b (+ k 1)) 2))"},
        {"a = b.c.d", "(define a (member d (member c b)))"},
        {"a = b[1].c[2]", "(define a (index (member c (index b 1)) 2))"},
        {"a = f()", "(define a (call f))"},
        {"a = f(1, b, k = c -- d)", "(define a (call f 1 b (argument k (-- c d))))"},
        {"a = f(g(1)[2])", "(define a (call f (index (call g 1) 2)))"},
        {"a = f(\"x \\\"y\\\" \\\\\")", "(define a (call f 'x \"y\" \\'))"},
        {"a = open || short", "(define a (|| open short))"},
    };
    (void)state;
    trees(rows, COUNT(rows));
}

static void operators(void **state) {
    static const row rows[] = {
        {"a = 1 + 2 - 3", "(define a (- (+ 1 2) 3))"},
        {"a = 1 + 2*3/4", "(define a (+ 1 (/ (* 2 3) 4)))"},
        {"a = -b^2", "(define a (minus (^ b 2)))"},
        {"a = b^-c^2", "(define a (^ b (minus (^ c 2))))"},
        {"a = b^c^d", "(define a (^ b (^ c d)))"},
        {"a = -b*-c", "(define a (* (minus b) (minus c)))"},
        {"a = b - (-c)", "(define a (- b (group (minus c))))"},
        {"a = b - -c", "(define a (- b (minus c)))"},
        {"a = b --c", "(define a (-- b c))"},
        {"a = z[1]^2", "(define a (^ (index z 1) 2))"},
        {"a = 90 deg @ f0", "(define a (@ 0.25:deg f0))"},
        {"a = b + 1 @ 2*f", "(define a (@ (+ b 1) (* 2 f)))"},
        {"a = b +/- 5%", "(define a (+/- b 0.05:%))"},
        {"a = b \xC2\xB1 c normal", "(define a (+/- normal b c))"},
        {"a = b +/- 5% normal @ f", "(define a (@ (+/- normal b 0.05:%) f))"},
        {"a = b @ f .. c @ g", "(define a (.. (@ b f) (@ c g)))"},
    };
    (void)state;
    trees(rows, COUNT(rows));
}

static void conditions(void **state) {
    static const row rows[] = {
        {"if a < b {}", "(if (< a b) (block))"},
        {"if a <= b {}", "(if (<= a b) (block))"},
        {"if a > b {}", "(if (> a b) (block))"},
        {"if a >= b {}", "(if (>= a b) (block))"},
        {"if a == b {}", "(if (== a b) (block))"},
        {"if a != b {}", "(if (!= a b) (block))"},
        {"if a < b and c or d and not e {}", "(if (or (and (< a b) c) (and d (not e))) (block))"},
        {"if a or b or c {}", "(if (or (or a b) c) (block))"},
        {"if not not a {}", "(if (not (not a)) (block))"},
        {"if not (a or b) and c {}", "(if (and (not (group (or a b))) c) (block))"},
        {"if ((a < b)) {}", "(if (group (group (< a b))) (block))"},
        {"if (a + b)*c < d {}", "(if (< (* (group (+ a b)) c) d) (block))"},
        {"if ((a)) == b {}", "(if (== (group (group a)) b) (block))"},
        {"if (a) {}", "(if (group a) (block))"},
    };
    (void)state;
    trees(rows, COUNT(rows));
}

static void chains(void **state) {
    static const row rows[] = {
        {"a -- 5 ohm -- b", "(path (-- a 5:ohm b))"},
        {"a", "(path (-- a))"},
        {"a -- shunt 3.3 pF || 1 nH -- b", "(path (-- a (shunt (|| 3.3e-12:pF 1e-09:nH)) b))"},
        {"a -- r: 5 ohm -- b", "(path (-- a (label r 5:ohm) b))"},
        {"a -- r[k]: x || s: y -- b", "(path (-- a (|| (label (index r k) x) (label s y)) b))"},
        {"a -- shunt c1: 3 pF", "(path (-- a (shunt (label c1 3e-12:pF))))"},
        {"a -- tank: (x || y) -- ground", "(path (-- a (label tank (group (|| x y))) ground))"},
        {"a -- (x -- shunt y) -- b", "(path (-- a (group (-- x (shunt y))) b))"},
        {"x || y || z", "(path (-- (|| x y z)))"},
        {"shunt x", "(path (-- (shunt x)))"},
        {"n[1] -- x -- S.n[2]", "(path (-- (index n 1) x (index (member n S) 2)))"},
    };
    (void)state;
    trees(rows, COUNT(rows));
}

/* ---- statements ---------------------------------------------------------------------------------- */

static void definitions(void **state) {
    static const row rows[] = {
        {"title \"a b\"", "(title 'a b')"},
        {"include \"p.anab\"", "(include 'p.anab')"},
        {"shared z = 5 ohm +/- 1%", "(define z shared (+/- 5:ohm 0.01:%))"},
        {"coil(l, q = 40) = inductor(l, q = q)",
         "(kind coil (parameters (parameter l) (parameter q 40)) (call inductor l (argument q q)))"},
        {"k() = x -- shunt y", "(kind k (parameters) (-- x (shunt y)))"},
        {"assume inductor(q = 40 @ f), capacitor(q = 200)",
         "(assume (call inductor (argument q (@ 40 f))) (call capacitor (argument q 200)))"},
        {"tune c = 3 pF within 1 pF .. 5 pF", "(tune c 3e-12:pF (tune-within (.. 1e-12:pF 5e-12:pF)))"},
        {"tune c = 3 within r series E24 from [1, 2]",
         "(tune c 3 (tune-within r) (tune-series E24) (tune-from (list 1 2)))"},
        {"tune c = 3 from l", "(tune c 3 (tune-from l))"},
        {"tune c = 3", "(tune c 3)"},
        {"cases c = [1, 2]", "(cases c (list 1 2))"},
        {"cases c = l", "(cases c l)"},
        {"cases c = 1 .. 2 points 3", "(cases c (.. 1 2) (points 3))"},
    };
    (void)state;
    trees(rows, COUNT(rows));
}

static void networks(void **state) {
    static const row rows[] = {
        {"port a, b[2]: z0", "(port z (names a (index b 2)) z0)"},
        {"port a", "(port (names a))"},
        {"port a: 50 ohm @ f at n, ground", "(port z at (names a) (@ 50:ohm f) (at-nodes n ground))"},
        {"port a at n[1]", "(port at (names a) (at-nodes (index n 1)))"},
        {"join a, b[1], S.x, ground", "(join a (index b 1) (member x S) ground)"},
        {"x on ()", "(place x (terminals))"},
        {"f(1) on (a, ground)", "(place (call f 1) (terminals a ground))"},
        {"t: f(1) on (a, gate = n[1])",
         "(place labelled t (call f 1) (terminals a (argument gate (index n 1))))"},
        {"t[k]: (x || y) on (a, b)", "(place labelled (index t k) (group (|| x y)) (terminals a b))"},
        {"network x(p, q = 1) { port a, b; a -- p -- b }",
         "(network x (parameters (parameter p) (parameter q 1)) (block (port (names a b)) (path (-- a p "
         "b))))"},
        {"network x() {}", "(network x (parameters) (block))"},
        {"for k in 1 .. n { a[k] -- r -- b }", "(for k (.. 1 n) (block (path (-- (index a k) r b))))"},
        {"for k in all {}", "(for k all (block))"},
        {"if a { b = 1 } else { b = 2 }", "(if a (block (define b 1)) (block (define b 2)))"},
        {"if a {} else if b {} else {}", "(if a (block) (if b (block) (block)))"},
    };
    (void)state;
    trees(rows, COUNT(rows));
}

static void sweeps(void **state) {
    static const row rows[] = {
        {"sweep 1 GHz .. 2 GHz points 5", "(sweep (.. 1e+09:GHz 2e+09:GHz) (points 5))"},
        {"sweep band step 1 MHz", "(sweep band (step 1e+06:MHz))"},
        {"sweep a .. b per decade 10", "(sweep (.. a b) (per-decade 10))"},
        {"sweep at 1 MHz, f", "(sweep (sweep-at 1e+06:MHz f))"},
        {"require loss(a) >= 3 dB", "(require (call loss a) (at-least 3:dB))"},
        {"require m <= 2 over a .. b weight 3", "(require m (at-most 2) (over (.. a b)) (weight 3))"},
        {"require m within 1 .. 2 at f weight w",
         "(require m (within (.. 1 2)) (at-frequency f) (weight w))"},
        {"require m within r over band", "(require m (within r) (over band))"},
        {"drive a: 10 W", "(drive a 10:W)"},
        {"drive a[1]: 10 dBm, 180 deg", "(drive (index a 1) 10:dBm 0.5:deg)"},
    };
    (void)state;
    trees(rows, COUNT(rows));
}

/* ---- ends of statements ------------------------------------------------------------------------- */

static void line_ends(void **state) {
    static const row rows[] = {
        {"", ""},
        {"\n\n;;\n", ""},
        {"# only this", ""},
        {"\xEF\xBB\xBF"
         "a = 1\r\nb = 2\r\n",
         "(define a 1) (define b 2)"},
        {"a = 1; b = 2;", "(define a 1) (define b 2)"},
        /* after a name, number, unit, string, bracket or whole value */
        {"a = b\nc = 1", "(define a b) (define c 1)"},
        {"a = 1\nc = 1", "(define a 1) (define c 1)"},
        {"a = 1 ohm\nc = 1", "(define a 1:ohm) (define c 1)"},
        {"a = 1\nohm = 1", "(define a 1) (define ohm 1)"},
        {"a = 5%\nc = 1", "(define a 0.05:%) (define c 1)"},
        {"title \"t\"\nc = 1", "(title 't') (define c 1)"},
        {"a = (b)\nc = 1", "(define a (group b)) (define c 1)"},
        {"a = [b]\nc = 1", "(define a (list b)) (define c 1)"},
        {"if a {}\nc = 1", "(if a (block)) (define c 1)"},
        {"a = pi\nb = j\nc = c0\nd = frequency\ne = open\nf = short\ng -- ground\nh = 1",
         "(define a pi) (define b j) (define c c0) (define d frequency) (define e open) (define f short) "
         "(path (-- g ground)) (define h 1)"},
        /* not after anything else */
        {"a =\n1", "(define a 1)"},
        {"a = 1 +\n2", "(define a (+ 1 2))"},
        {"a -- shunt\nb", "(path (-- a (shunt b)))"},
        {"port\na,\nb:\n5 ohm", "(port z (names a b) 5:ohm)"},
        {"sweep\n1 ..\n2 points 3", "(sweep (.. 1 2) (points 3))"},
        {"if a and\nnot\nb {}", "(if (and a (not b)) (block))"},
        /* and not before what goes on */
        {"a\n-- b\n|| c", "(path (-- a (|| b c)))"},
        {"a # why\n\n# more\n-- b", "(path (-- a b))"},
        {"if a\n{}\nelse\n{}", "(if a (block) (block))"},
        {"network x()\n{\n}", "(network x (parameters) (block))"},
        /* but before a sign, a bracket or a contextual word */
        {"a = b\n(c) on ()", "(define a b) (place (group c) (terminals))"},
        {"r -- x\npoints -- y", "(path (-- r x)) (path (-- points y))"},
        /* inside brackets it is a blank */
        {"a = (1\n+ 2\n)", "(define a (group (+ 1 2)))"},
        {"a = [1\n,\n2\n]", "(define a (list 1 2))"},
        {"a = f(\nb\n,\nc = 1\n)\nd = 2", "(define a (call f b (argument c 1))) (define d 2)"},
        /* a closing brace ends a statement */
        {"if a { b = 1 }", "(if a (block (define b 1)))"},
        {"if a { b -- c; d = 1 }\ne = 1", "(if a (block (path (-- b c)) (define d 1))) (define e 1)"},
        /* blanks that are no ASCII */
        {"a\xC2\xA0=\xE2\x80\x89"
         "1\xE2\x80\xAFohm",
         "(define a 1:ohm)"},
    };
    (void)state;
    trees(rows, COUNT(rows));
}

/* Words of the grammar that are free as names elsewhere. */
static void contextual_words(void **state) {
    static const char *const words[] = {"at",     "over",  "within", "on",       "in",     "points",
                                        "step",   "per",   "decade", "weight",   "series", "from",
                                        "normal", "phase", "line",   "resistor", "sqrt"};
    (void)state;
    for (size_t i = 0; i < sizeof words / sizeof *words; i++) {
        char text[200], want[300];
        snprintf(text, sizeof text, "%s = 1\na -- %s -- b\nport c: %s\nx = f(%s = %s)", words[i], words[i],
                 words[i], words[i], words[i]);
        snprintf(
            want, sizeof want,
            "(define %s 1) (path (-- a %s b)) (port z (names c) %s) (define x (call f (argument %s %s)))",
            words[i], words[i], words[i], words[i], words[i]);
        check_bytes(anb__parse, text, strlen(text), want, "");
    }
}

static void reserved_words(void **state) {
    static const char *const words[] = {"title", "include", "network", "port", "join",     "for",    "if",
                                        "else",  "sweep",   "require", "tune", "shared",   "assume", "cases",
                                        "drive", "shunt",   "ground",  "open", "short",    "and",    "or",
                                        "not",   "pi",      "j",       "c0",   "frequency"};
    (void)state;
    for (size_t i = 0; i < sizeof words / sizeof *words; i++) {
        char text[100], want[200];
        snprintf(text, sizeof text, "network %s() {}", words[i]);
        snprintf(want, sizeof want,
                 "1:9-%zu: `%s` is a word of the language and cannot be a name [reserved]\n",
                 9 + strlen(words[i]), words[i]);
        check_bytes(anb__parse, text, strlen(text), "error", want);
    }
}

/* ---- spans ------------------------------------------------------------------------------------------ */

static void spans(void **state) {
    static const char text[] = "a = 1\nport b,  c: 5 ohm  at n ; d = 2";
    parsed p;
    (void)state;
    parse_bytes(&p, anb__parse, text, strlen(text));
    const anb__tree *port = p.tree->first->next, *names = port->first;
    assert_int_equal(p.tree->span.end, strlen(text));
    assert_int_equal(p.tree->first->span.end, 5);
    assert_int_equal(p.tree->first->name_span.end, 1);
    assert_int_equal(port->span.start, 6);
    assert_int_equal(port->span.end, 29);
    assert_int_equal(names->span.start, 11);
    assert_int_equal(names->span.end, 16);
    assert_int_equal(names->next->span.start, 18);
    assert_int_equal(names->next->span.end, 23);
    anb__arena_free(&p.arena);
}

/* ---- mistakes ------------------------------------------------------------------------------------ */

static void mistakes_in_numbers(void **state) {
    static const row rows[] = {
        {"a = 10 mhz", "1:5-11: `mhz` is not a unit [unit] | `10 MHz`\n"},
        {"a = 100k", "1:5-9: `k` is not a unit [unit] | a prefix needs its unit: `100 kohm`, `100 kHz`\n"},
        {"a = 4k7", "1:5-8: `k7` is not a unit [unit] | a point and a unit: `4.7 kohm`\n"},
        {"a = 3j", "1:5-7: `j` is not a unit [unit] | the imaginary unit is a factor: `3*j`\n"},
        {"a = 5 in", "1:5-9: `in` is not a unit [unit] | `5 inch`\n"},
        {"a = 2 z0", "1:5-9: `z0` is not a unit [unit] | a product is written with a star: `2*z0`\n"},
        {"a = 3,3 pF", "1:5-11: a decimal comma? Numbers have a point [decimal-comma] | `3.3 pF`\n"},
        {"a = 2 ohm^2", "1:5-11: `^` straight after a unit: is the unit meant, or the value? "
                        "[power-of-unit] | `(2 ohm)^...` is a power of the value\n"},
        {"a = 1/2 ohm",
         "1:5-12: `1/2 ohm` has two readings [two-readings] | `(1/2)*1 ohm`, or `1/(2 ohm)`\n"},
        /* what stands behind still counts */
        {"a = 10 mhz + 3 ghz", "1:5-11: `mhz` is not a unit [unit] | `10 MHz`\n"
                               "1:14-19: `ghz` is not a unit [unit] | `3 GHz`\n"},
    };
    (void)state;
    mistakes(rows, COUNT(rows));
}

static void mistakes_in_text(void **state) {
    static const row rows[] = {
        {"a = 5 \xE2\x88\x92 3",
         "1:7-8: this is the typographic minus, U+2212 [typographic-minus] | write `-`, "
         "the hyphen of the keyboard\n"},
        {"a = \xE2\x88\x92 3",
         "1:5-6: this is the typographic minus, U+2212 [typographic-minus] | write `-`, "
         "the hyphen of the keyboard\n"},
        {"title \"abc\nb = 1", "1:7-8: this string has no end on its line [open-string] | end it with `\"`; "
                               "inside, `\\\"` and `\\\\` are the only escapes\n"},
        {"title \"a\\n\"", "1:7-8: this string has no end on its line [open-string] | end it with `\"`; "
                           "inside, `\\\"` and `\\\\` are the only escapes\n"},
        {"a = 1 ? 2", "1:7-8: `?` means nothing in this language [character]\n"},
        {"a = \xE2\x82\xAC", "1:5-6: `\xE2\x82\xAC` means nothing in this language [character]\n"},
        {"a = \xFF", "1:5-6: this is not UTF-8 [encoding]\n"},
        {"a = 1 # \xFF is fine here\nb = ?", "2:5-6: `?` means nothing in this language [character]\n"},
    };
    (void)state;
    mistakes(rows, COUNT(rows));
    static const char nul[] = "a = 1\nb = \0 2\nc = 3";
    check_bytes(anb__parse, nul, sizeof nul - 1, "(define a 1) (define b error) (define c 3)",
                "2:5-6: a byte of value 0 may not stand in a netlist [nul]\n");
}

static void mistakes_in_brackets(void **state) {
    static const row rows[] = {
        {"a = (1 + 2", "1:5-6: this `(` is not closed [open-bracket] | close it with `)`\n"},
        {"a = [1, 2; b = 1", "1:5-6: this `[` is not closed [open-bracket] | close it with `]`\n"},
        {"a = f(1\nport b", "1:6-7: this `(` is still open where the next statement begins [open-bracket] | "
                            "close it with `)`\n"},
        {"a = [1,\nsweep at f", "1:5-6: this `[` is still open where the next statement begins "
                                "[open-bracket] | close it with `]`\n"},
        {"a = (1]", "1:7-8: `,` or `)` is expected here, not `]` [expected]\n"},
        {"a = [1)", "1:7-8: `,` or `]` is expected here, not `)` [expected]\n"},
        {"a = 1)", "1:6-7: the end of the statement is expected here, not `)` [expected]\n"},
        {"network x() {\na -- b", "1:13-14: this `{` is not closed [open-brace] | close it with `}`\n"},
        {"a = 1\n}\nb = ?", "2:1-2: this `}` closes nothing [lonely-brace]\n"
                            "3:5-6: `?` means nothing in this language [character]\n"},
        {"a = 1\nelse { b = 1 }",
         "2:1-5: the end of the statement is expected here, not `else` [expected]\n"},
        {"else { b = 1 }", "1:1-5: this `else` belongs to no `if` [lonely-else]\n"},
    };
    (void)state;
    mistakes(rows, COUNT(rows));
}

static void what_is_expected(void **state) {
    static const row rows[] = {
        {"a =", "1:4-4: a value or a part is expected here, at the end [expected]\n"},
        {"a = *", "1:5-6: a value or a part is expected here, not `*` [expected]\n"},
        {"a -- ", "1:5-5: a value or a part is expected here, at the end [expected]\n"},
        {"a = 1 b", "1:5-8: `b` is not a unit [unit] | a product is written with a star: `1*b`\n"},
        {"a = b c", "1:7-8: the end of the statement is expected here, not `c` [expected]\n"},
        {"a = S.5", "1:6-8: the end of the statement is expected here, not `.5` [expected]\n"},
        {"a = S.*", "1:7-8: a name is expected here, not `*` [expected]\n"},
        {"title x", "1:7-8: a title in quotes is expected here, not `x` [expected]\n"},
        {"include", "1:8-8: a file's name in quotes is expected here, at the end [expected]\n"},
        {"port 5", "1:6-7: a name is expected here, not `5` [expected]\n"},
        {"join a,", "1:8-8: a name is expected here, at the end [expected]\n"},
        {"tune x", "1:7-7: `=` is expected here, at the end [expected]\n"},
        {"tune x 5", "1:8-9: `=` is expected here, not `5` [expected]\n"},
        {"cases 5 = 1", "1:7-8: a name is expected here, not `5` [expected]\n"},
        {"network x {}", "1:11-12: `(` is expected here, not `{` [expected]\n"},
        {"network x() a", "1:13-14: `{` is expected here, not `a` [expected]\n"},
        {"network x(5) {}", "1:11-12: a name is expected here, not `5` [expected]\n"},
        {"for k of 1 .. 2 {}", "1:7-9: `in` is expected here, not `of` [expected]\n"},
        {"if a b = 1", "1:6-7: `{` is expected here, not `b` [expected]\n"},
        {"if a {} else b", "1:14-15: `{` is expected here, not `b` [expected]\n"},
        {"x on a", "1:6-7: `(` and the nodes is expected here, not `a` [expected]\n"},
        {"x on (5)", "1:7-8: a name is expected here, not `5` [expected]\n"},
        {"sweep a .. b",
         "1:13-13: `points`, `step` or `per decade` is expected here, at the end [expected]\n"},
        {"sweep a .. b per 10", "1:18-20: `decade` is expected here, not `10` [expected]\n"},
        {"require m", "1:10-10: `>=`, `<=` or `within` is expected here, at the end [expected]\n"},
        {"require m == 5", "1:11-13: `>=`, `<=` or `within` is expected here, not `==` [expected]\n"},
        {"drive a 5 W", "1:9-10: `:` and a power is expected here, not `5` [expected]\n"},
        {"port = 5", "1:6-7: a name is expected here, not `=` [expected]\n"},
        {"shared pi = 5", "1:8-10: `pi` is a word of the language and cannot be a name [reserved]\n"},
    };
    (void)state;
    mistakes(rows, COUNT(rows));
}

static void mistakes_in_chains(void **state) {
    static const row rows[] = {
        {"a -- c1: shunt 3 pF", "1:6-15: a label stands behind `shunt`, not before it [label-before-shunt] | "
                                "`shunt c1: ...`\n"},
        {"a -- x || shunt y -- b", "1:11-16: `shunt` may not stand under `||` [shunt-in-parallel]\n"},
        {"assume x",
         "1:8-9: `assume` takes parts with options [assume] | `assume inductor(q = 40 @ 100 MHz)`\n"},
        {"assume inductor(5)", "1:17-18: `assume` takes options with their names only [assume]\n"},
    };
    (void)state;
    mistakes(rows, COUNT(rows));
}

/* ---- recovery -------------------------------------------------------------------------------------- */

/* Each mistake is told, once, and what is right stays. */
static void recovery(void **state) {
    static const char text[] = "a = 1 +\n"
                               "b = * 2\n"
                               "c = 3\n"
                               "tune d = ) within q\n"
                               "network e(5) { x = ? }\n"
                               "network f(p) {\n"
                               "    g = ]\n"
                               "    h -- 5 mhz -- i\n"
                               "    port\n"
                               "    k = 1\n"
                               "}\n"
                               "coil(l) = *\n"
                               "cases m\n"
                               "n -- n -- +; o = 6\n"
                               "q = 7\n";
    (void)state;
    check_bytes(
        anb__parse, text, strlen(text),
        "(define a error) (define c 3) (tune d error) (network e (parameters) (block)) "
        "(network f (parameters (parameter p)) (block (define g error) (path (-- h error i)) error)) "
        "(kind coil (parameters (parameter l)) error) (cases m error) error (define o 6) (define q 7)",
        "2:3-4: the end of the statement is expected here, not `=` [expected]\n"
        "4:10-11: a value or a part is expected here, not `)` [expected]\n"
        "5:11-12: a name is expected here, not `5` [expected]\n"
        "7:9-10: a value or a part is expected here, not `]` [expected]\n"
        "8:10-15: `mhz` is not a unit [unit] | `5 MHz`\n"
        "10:7-8: the end of the statement is expected here, not `=` [expected]\n"
        "12:11-12: a value or a part is expected here, not `*` [expected]\n"
        "13:8-8: `=` is expected here, at the end [expected]\n"
        "14:11-12: a value or a part is expected here, not `+` [expected]\n");
}

/* A mistake inside brackets ends with its statement's line. */
static void recovery_in_brackets(void **state) {
    static const char text[] =
        "a = f(1, *)\nb = ?\nif c < { d = 1 }\ne = (1 + ]\nfor k in 1 .. { g = ? }\nh = 1";
    (void)state;
    check_bytes(anb__parse, text, strlen(text),
                "(define a error) (define b error) error (define e error) error (define h 1)",
                "1:10-11: a value or a part is expected here, not `*` [expected]\n"
                "2:5-6: `?` means nothing in this language [character]\n"
                "3:8-9: a value or a part is expected here, not `{` [expected]\n"
                "4:10-11: a value or a part is expected here, not `]` [expected]\n"
                "5:15-16: a value or a part is expected here, not `{` [expected]\n");
}

/* A mistake takes neither the next line, where a byte without meaning ends its own, nor a statement that
 * begins with its word. */
static void recovery_at_lines(void **state) {
    static const char ends[] = "a = 3 ?\nb = 1\ntitle \"t\nc = 2\n",
                      words[] = "a =\nport b\nc = f(*,\nsweep at f";
    (void)state;
    check_bytes(
        anb__parse, ends, strlen(ends), "(define a error) (define b 1) error (define c 2)",
        "1:7-8: `?` means nothing in this language [character]\n"
        "3:7-8: this string has no end on its line [open-string] | end it with `\"`; inside, `\\\"` and "
        "`\\\\` are the only escapes\n");
    check_bytes(anb__parse, words, strlen(words),
                "(define a error) (port (names b)) (define c error) (sweep (sweep-at f))",
                "2:1-5: a value or a part is expected here, not `port` [expected]\n"
                "3:7-8: a value or a part is expected here, not `*` [expected]\n");
}

/* ---- nesting ----------------------------------------------------------------------------------------- */

/* `before`, then `opening` and `closing` around `inside`, `depth` times, then `after`. */
static void put_nested(anb__text *text, const char *before, const char *opening, const char *inside,
                       const char *closing, const char *after, unsigned depth) {
    anb__text_string(text, before);
    for (unsigned i = 0; i < depth; i++) anb__text_string(text, opening);
    anb__text_string(text, inside);
    for (unsigned i = 0; i < depth; i++) anb__text_string(text, closing);
    anb__text_string(text, after);
}

static unsigned errors_in(anb__text *text) {
    parsed p;
    parse_bytes(&p, anb__parse, text->bytes, text->length - 1);
    unsigned errors = p.report.errors;
    if (errors) assert_string_equal(p.report.first->code, "nesting");
    if (errors) assert_string_equal(p.report.first->text, "this is nested more than 200 deep, the limit");
    anb__arena_free(&p.arena);
    return errors;
}

/* 200 levels of every kind are fine, 201 or 202 are one mistake, and those after it have their 200 again. */
static void nesting(void **state) {
    static const struct {
        const char *before, *opening, *inside, *closing, *after;
        unsigned own; /* levels that are there already */
    } nested[] = {
        {"a = ", "(", "1", ")", "\n", 0},     {"a = ", "[", "1", "]", "\n", 0},
        {"a = ", "f(", "1", ")", "\n", 0},    {"a = ", "- ", "1", "", "\n", 0},
        {"if ", "not ", "a", "", " {}\n", 0}, {"if ", "(", "a < b", ")", " {}\n", 0},
        {"", "if a {", "", "}", "\n", 0},     {"if a {}", " else if a {}", "", "", "\n", 1},
    };
    (void)state;
    for (size_t i = 0; i < sizeof nested / sizeof *nested; i++) {
        unsigned most = 200 - nested[i].own;
        for (unsigned over = 0; over < 3; over++) {
            anb__text text = {0};
            put_nested(&text, nested[i].before, nested[i].opening, nested[i].inside, nested[i].closing,
                       nested[i].after, most + over);
            put_nested(&text, nested[i].before, nested[i].opening, nested[i].inside, nested[i].closing,
                       nested[i].after, most);
            anb__text_char(&text, '\0');
            assert_false(text.failed);
            unsigned errors = errors_in(&text);
            if (errors != (over > 0))
                fail_msg("`%s` %u deep: %u errors", nested[i].opening, most + over, errors);
            anb__text_free(&text);
        }
    }
}

/* ---- replacements ------------------------------------------------------------------------------------- */

static void check_rule(parse *rule, const char *text, const char *tree, const char *messages) {
    check_bytes(rule, text, strlen(text), tree, messages);
}

static void overrides(void **state) {
    (void)state;
    check_rule(anb__parse_override, "z=75ohm", "(define z 75:ohm)", "");
    check_rule(anb__parse_override, "z", NULL, "1:1-2: `name=value` is expected [override]\n");
    check_rule(anb__parse_override, "z = 1; y = 2", NULL,
               "1:6-13: nothing is expected after `z = 1` [expected]\n");
    check_rule(anb__parse_override, "z = *", NULL,
               "1:5-6: a value or a part is expected here, not `*` [expected]\n");
    check_rule(anb__parse_sweep_override, "1 GHz .. 2 GHz points 5",
               "(sweep (.. 1e+09:GHz 2e+09:GHz) (points 5))", "");
    check_rule(anb__parse_sweep_override, "at f", "(sweep (sweep-at f))", "");
    check_rule(anb__parse_sweep_override, "1 .. 2 points 5 6", NULL,
               "1:17-18: nothing is expected after `1 .. 2 points 5` [expected]\n");
    check_rule(anb__parse_sweep_override, "1 GHz", NULL,
               "1:6-6: `points`, `step` or `per decade` is expected here, at the end [expected]\n");
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(numbers),
                                       cmocka_unit_test(primaries),
                                       cmocka_unit_test(operators),
                                       cmocka_unit_test(conditions),
                                       cmocka_unit_test(chains),
                                       cmocka_unit_test(definitions),
                                       cmocka_unit_test(networks),
                                       cmocka_unit_test(sweeps),
                                       cmocka_unit_test(line_ends),
                                       cmocka_unit_test(contextual_words),
                                       cmocka_unit_test(reserved_words),
                                       cmocka_unit_test(spans),
                                       cmocka_unit_test(mistakes_in_numbers),
                                       cmocka_unit_test(mistakes_in_text),
                                       cmocka_unit_test(mistakes_in_brackets),
                                       cmocka_unit_test(what_is_expected),
                                       cmocka_unit_test(mistakes_in_chains),
                                       cmocka_unit_test(recovery),
                                       cmocka_unit_test(recovery_in_brackets),
                                       cmocka_unit_test(recovery_at_lines),
                                       cmocka_unit_test(nesting),
                                       cmocka_unit_test(overrides)};
    return cmocka_run_group_tests(tests, NULL, NULL) ? 1 : 0;
}
