#include "language/parse.h"

#include "language/parser.h"

static void begin(anb__parser *p, anb__report *report, anb__names *names, anb__arena *arena,
                  uint32_t source) {
    const anb__source *text = &report->sources.list[source];
    *p = (anb__parser){.report = report,
                       .names = names,
                       .arena = arena,
                       .text = text->text,
                       .length = text->length,
                       .source = source};
    anb__reader_start(p, 0);
}

/* After a piece of text that is all there should be. */
static void expect_end(anb__parser *p) {
    if (p->failed || p->now.kind == ANB__TOKEN_END) return;
    anb__mistake(p, anb__span_at(p, p->now.start, p->length), "expected", "nothing is expected after `%.*s`",
                 (int)p->end_before, p->text);
}

anb__tree *anb__parse(anb__report *report, anb__names *names, anb__arena *arena, uint32_t source) {
    anb__parser p;
    begin(&p, report, names, arena, source);
    anb__tree *file = anb__new_tree(&p, ANB__TREE_FILE, 0);
    file->span.end = p.length;
    while (p.now.kind != ANB__TOKEN_END) {
        if (p.now.kind == ANB__TOKEN_LINE || p.now.kind == ANB__TOKEN_SEMICOLON) {
            anb__advance(&p);
        } else if (p.now.kind == ANB__TOKEN_RIGHT_BRACE) {
            anb__mistake(&p, anb__span_of(&p, p.now), "lonely-brace", "this `}` closes nothing");
            p.failed = false;
            anb__advance(&p);
        } else {
            anb__add_child(file, anb__parse_statement(&p));
        }
    }
    return file;
}

anb__tree *anb__parse_override(anb__report *report, anb__names *names, anb__arena *arena, uint32_t source) {
    anb__parser p;
    begin(&p, report, names, arena, source);
    anb__tree *tree = anb__parse_statement(&p);
    if (tree->kind != ANB__TREE_DEFINE && tree->kind != ANB__TREE_ERROR)
        anb__mistake(&p, tree->span, "override", "`name=value` is expected");
    expect_end(&p);
    return tree;
}

anb__tree *anb__parse_sweep_override(anb__report *report, anb__names *names, anb__arena *arena,
                                     uint32_t source) {
    anb__parser p;
    begin(&p, report, names, arena, source);
    anb__tree *tree = anb__parse_sweep_of(&p, anb__new_tree(&p, ANB__TREE_SWEEP, p.now.start));
    expect_end(&p);
    return tree;
}
