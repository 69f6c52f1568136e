/* The regular pieces of the language. */
#include "token.h"

anb__token anb__lex(const char *text, uint32_t length, uint32_t at, bool comments) {
    typedef unsigned char YYCTYPE;
    const YYCTYPE *start = (const YYCTYPE *)text, *YYLIMIT = start + length;
    const YYCTYPE *YYCURSOR = start + at, *YYMARKER;
    anb__token token = {ANB__TOKEN_END, length, length, 0};
    for (;;) {
        token.start = (uint32_t)(YYCURSOR - start);
        /*!re2c
        re2c:flags:utf-8 = 1;
        re2c:yyfill:enable = 0;
        re2c:eof = 0;

        digit   = [0-9];
        letter  = [A-Za-z_];
        /* micro and ohm, two code points each, and the degree */
        sign    = "\u00b5" | "\u03bc" | "\u03a9" | "\u2126" | "\u00b0";
        word    = (letter | sign) (letter | digit | sign)* | "%";
        number  = (digit+ ("." digit+)? | "." digit+) ([eE] [-+]? digit+)?;
        string  = "\"" ([^"\\\n\x00] | "\\" ["\\])* "\"";
        blank   = [ \t\r] | "\u00a0" | "\u2009" | "\u202f";

        $           { token.kind = ANB__TOKEN_END; token.start = token.end = length; return token; }
        blank+      { continue; }
        "\n"        { token.lines++; continue; }
        "#"         { token.kind = ANB__TOKEN_COMMENT; goto comment; }
        number      { token.kind = ANB__TOKEN_NUMBER; goto found; }
        word        { token.kind = ANB__TOKEN_WORD; goto found; }
        string      { token.kind = ANB__TOKEN_STRING; goto found; }
        "\""        { token.kind = ANB__TOKEN_OPEN_STRING; goto found; }
        "--"        { token.kind = ANB__TOKEN_DASHES; goto found; }
        "||"        { token.kind = ANB__TOKEN_BARS; goto found; }
        ".."        { token.kind = ANB__TOKEN_DOTS; goto found; }
        "+/-"       { token.kind = ANB__TOKEN_TOLERANCE; goto found; }
        "\u00b1"    { token.kind = ANB__TOKEN_TOLERANCE; goto found; }
        "<="        { token.kind = ANB__TOKEN_LESS_EQUAL; goto found; }
        ">="        { token.kind = ANB__TOKEN_GREATER_EQUAL; goto found; }
        "=="        { token.kind = ANB__TOKEN_EQUAL; goto found; }
        "!="        { token.kind = ANB__TOKEN_NOT_EQUAL; goto found; }
        "<"         { token.kind = ANB__TOKEN_LESS; goto found; }
        ">"         { token.kind = ANB__TOKEN_GREATER; goto found; }
        "="         { token.kind = ANB__TOKEN_IS; goto found; }
        ":"         { token.kind = ANB__TOKEN_COLON; goto found; }
        ";"         { token.kind = ANB__TOKEN_SEMICOLON; goto found; }
        ","         { token.kind = ANB__TOKEN_COMMA; goto found; }
        "("         { token.kind = ANB__TOKEN_LEFT_PARENTHESIS; goto found; }
        ")"         { token.kind = ANB__TOKEN_RIGHT_PARENTHESIS; goto found; }
        "["         { token.kind = ANB__TOKEN_LEFT_BRACKET; goto found; }
        "]"         { token.kind = ANB__TOKEN_RIGHT_BRACKET; goto found; }
        "{"         { token.kind = ANB__TOKEN_LEFT_BRACE; goto found; }
        "}"         { token.kind = ANB__TOKEN_RIGHT_BRACE; goto found; }
        "+"         { token.kind = ANB__TOKEN_PLUS; goto found; }
        "-"         { token.kind = ANB__TOKEN_MINUS; goto found; }
        "*"         { token.kind = ANB__TOKEN_STAR; goto found; }
        "/"         { token.kind = ANB__TOKEN_SLASH; goto found; }
        "^"         { token.kind = ANB__TOKEN_CARET; goto found; }
        "@"         { token.kind = ANB__TOKEN_AT; goto found; }
        "."         { token.kind = ANB__TOKEN_DOT; goto found; }
        "\u2212"    { token.kind = ANB__TOKEN_TYPOGRAPHIC_MINUS; goto found; }
        "\x00"      { token.kind = ANB__TOKEN_NUL; goto found; }
        [^]         { token.kind = ANB__TOKEN_OTHER; goto found; }
        *           { token.kind = ANB__TOKEN_BROKEN; goto found; }
        */
    comment:
        /* anything may stand in a comment, broken UTF-8 too */
        while (YYCURSOR < YYLIMIT && *YYCURSOR != '\n') YYCURSOR++;
        if (!comments) continue;
    found:
        token.end = (uint32_t)(YYCURSOR - start);
        return token;
    }
}
