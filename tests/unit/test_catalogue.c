/* The tables of what the language knows: no name twice, every entry whole. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>

#include <cmocka.h>
#include <string.h>

#include "network/catalogue.h"
#include "network/operation.h"
#include "network/quantity.h"

static void no_name_is_there_twice(void **state) {
    (void)state;
    typedef unsigned list(const char *names[ANB__MOST_NAMES]);
    static list *const lists[] = {anb__part_names, anb__function_names, anb__measure_names};
    for (size_t l = 0; l < 3; l++) {
        const char *names[ANB__MOST_NAMES];
        unsigned count = lists[l](names);
        assert_in_range(count, 10, ANB__MOST_NAMES);
        for (unsigned i = 0; i < count; i++)
            for (unsigned k = 0; k < i; k++) assert_string_not_equal(names[i], names[k]);
    }
}

static void names_are_found(void **state) {
    (void)state;
    anb__part_kind kind;
    for (int i = 0; i < ANB__PART_KIND_COUNT; i++) {
        assert_true(anb__find_part(anb__parts[i].name, &kind));
        assert_int_equal(kind, i);
    }
    assert_false(anb__find_part("resitor", &kind));
    assert_non_null(anb__find_function("preferred"));
    assert_null(anb__find_function("tanh"));
    assert_non_null(anb__find_measure("group_delay"));
    assert_null(anb__find_measure("s"));
    assert_true(anb__is_composing("repeat") && !anb__is_composing("line"));
    assert_true(anb__is_later_part("stackup") && !anb__is_later_part("line"));
}

static void check_argument(const anb__part_entry *part, int index) {
    const anb__argument_entry *entry = &part->arguments[index];
    assert_ptr_equal(anb__find_argument(part, entry->key), entry);
    assert_in_range(entry->form_count, 1, ANB__MOST_FORMS);
    assert_in_range(entry->name, 0, ANB__ARG_COUNT - 1);
    assert_in_range(entry->excludes, 0, 3);
    for (int k = 0; k < index; k++) {
        assert_int_not_equal(part->arguments[k].name, entry->name);
        /* what is given by its place comes first, or a place would be skipped */
        if (entry->rules & ANB__BY_PLACE) assert_true(part->arguments[k].rules & ANB__BY_PLACE);
    }
}

static void arguments_are_whole(void **state) {
    (void)state;
    for (int i = 0; i < ANB__PART_KIND_COUNT; i++) {
        assert_non_null(anb__parts[i].on);
        for (int k = 0; k < anb__parts[i].argument_count; k++) check_argument(&anb__parts[i], k);
    }
}

static void check_layout(const anb__layout *layout) {
    bool touched[ANB__MOST_TERMINALS] = {false};
    assert_in_range(layout->terminal_count, 2, ANB__MOST_TERMINALS);
    for (int i = 0; i < layout->terminal_count; i++) assert_non_null(layout->terminals[i]);
    for (int i = 0; i < layout->branch_count; i++)
        for (int side = 0; side < 2; side++) {
            uint8_t terminal = layout->branches[i][side];
            if (side == 1 && terminal == ANB__TO_GROUND) continue;
            assert_in_range(terminal, 0, layout->terminal_count - 1);
            assert_false(touched[terminal]);
            touched[terminal] = true;
        }
    for (int i = 0; i < layout->terminal_count; i++) assert_true(touched[i]);
}

static void every_terminal_has_one_branch(void **state) {
    (void)state;
    for (int i = 0; i < ANB__PART_KIND_COUNT; i++) {
        if (anb__parts[i].chain) {
            assert_int_equal(anb__parts[i].chain->terminal_count, 2);
            check_layout(anb__parts[i].chain);
        }
        check_layout(anb__parts[i].on);
    }
}

static void measures_are_whole(void **state) {
    (void)state;
    const char *names[ANB__MOST_NAMES];
    unsigned count = anb__measure_names(names);
    for (unsigned i = 0; i < count; i++) {
        const anb__measure_entry *entry = anb__find_measure(names[i]);
        assert_true(*entry->shape && *entry->usage);
        for (const char *c = entry->shape; *c; c++) {
            assert_non_null(strchr("plnm+", *c));
            assert_true(*c != '+' || !c[1]);
        }
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(no_name_is_there_twice), cmocka_unit_test(names_are_found),
        cmocka_unit_test(arguments_are_whole),    cmocka_unit_test(every_terminal_has_one_branch),
        cmocka_unit_test(measures_are_whole),
    };
    int failures = cmocka_run_group_tests(tests, NULL, NULL);
    return failures ? 1 : 0;
}
