// SPDX-License-Identifier: GPL-3.0-or-later
// Delimited text: RFC 4180 (quoting, line ends), RFC 3629 (UTF-8), and where every field stands.
#include "import/delimited.hpp"

#include <rapidcheck/catch.h>

#include <catch2/catch.hpp>

#include "tests/import/import_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

using Texts = std::vector<std::vector<std::string>>;

Texts texts(std::string_view text) {
    Texts out;
    for (const Row& row : read_delimited(text, "stock.csv")) {
        out.emplace_back();
        for (const Field& field : row) out.back().push_back(field.text);
    }
    return out;
}

/// "LINE:COLUMN" of every field of every row, in order.
std::vector<std::string> places(std::string_view text) {
    std::vector<std::string> out;
    for (const Row& row : read_delimited(text, "stock.csv"))
        for (const Field& field : row) out.push_back(std::to_string(field.line) + ":" + std::to_string(field.column));
    return out;
}

std::vector<std::string> refused(std::string_view text) {
    return faults_of([&] { return read_delimited(text, "stock.csv"); });
}

std::string quoted(const std::string& text) {
    std::string out = "\"";
    for (const char c : text) out += c == '"' ? std::string("\"\"") : std::string(1, c);
    return out + '"';
}

}  // namespace

TEST_CASE("quoted fields hold delimiters and quotes and line ends", "[import][delimited]") {
    // RFC 4180, section 2, rules 5 to 7.
    CHECK(texts("a,\"b,c\",d\n") == Texts{{"a", "b,c", "d"}});
    CHECK(texts("a,\"12\"\" can\",d\n") == Texts{{"a", "12\" can", "d"}});
    CHECK(texts("a,\"two\nlines\",d\nnext,e,f\n") == Texts{{"a", "two\nlines", "d"}, {"next", "e", "f"}});
    CHECK(texts("\"\",\"\"\"\"\n") == Texts{{"", "\""}});
}

TEST_CASE("empty fields keep their place", "[import][delimited]") {
    CHECK(texts("a,,c\n,,\n,b,\n") == Texts{{"a", "", "c"}, {"", "b", ""}});
    CHECK(texts("a,") == Texts{{"a", ""}});
    CHECK(texts(",a\n") == Texts{{"", "a"}});
    CHECK(texts("a\t\tc\n") == Texts{{"a", "", "c"}});
    CHECK(texts("").empty());
    CHECK(texts("\n \n\t\n").empty());
}

TEST_CASE("lines may end in LF or CR LF or CR and the last one need not end", "[import][delimited]") {
    const Texts two{{"a", "b"}, {"c", "d"}};
    for (const char* text : {"a,b\nc,d\n", "a,b\r\nc,d\r\n", "a,b\rc,d\r", "a,b\nc,d", "a,b\r\nc,d", "a,b\rc,d"}) {
        CAPTURE(text);
        CHECK(texts(text) == two);
        CHECK(places(text) == std::vector<std::string>{"1:1", "1:3", "2:1", "2:3"});
    }
    CHECK(texts("\"a\r\nb\",c\r\n") == Texts{{"a\nb", "c"}});
    CHECK(places("a,b\n\n\n c,d\n").at(2) == "4:2");
}

TEST_CASE("the delimiter is the one that the first line holds most of", "[import][delimited]") {
    CHECK(texts("a;b;c\n1,5;2;3\n") == Texts{{"a", "b", "c"}, {"1,5", "2", "3"}});
    CHECK(texts("a\tb\n1,5\t2;3\n") == Texts{{"a", "b"}, {"1,5", "2;3"}});
    CHECK(texts("# one, two, three, four\na;b\n") == Texts{{"a", "b"}});
    // What stands in quotes delimits nothing.
    CHECK(texts("\"a,b,c\";d\n1;2\n") == Texts{{"a,b,c", "d"}, {"1", "2"}});
}

TEST_CASE("comment lines are passed over and a hash within a field is no comment", "[import][delimited]") {
    CHECK(texts("# a \"comment, with a quote\na,b\n#c,d\ne,f#g\n") == Texts{{"a", "b"}, {"e", "f#g"}});
    CHECK(texts("note,b\n\"first\n# second\",c\n") == Texts{{"note", "b"}, {"first\n# second", "c"}});
    CHECK(places("# one\n# two\na,b\n") == std::vector<std::string>{"3:1", "3:3"});
}

TEST_CASE("places count characters and not bytes and start inside the quotes", "[import][delimited]") {
    CHECK(places("µΩ,b\n") == std::vector<std::string>{"1:1", "1:4"});
    CHECK(places("\xEF\xBB\xBF" "a,b\n") == std::vector<std::string>{"1:1", "1:3"});
    CHECK(places("a,  b\n") == std::vector<std::string>{"1:1", "1:5"});
    CHECK(places("a,\"b\",c\n") == std::vector<std::string>{"1:1", "1:4", "1:7"});
    CHECK(places("\"a\nb\",c\n") == std::vector<std::string>{"1:2", "2:4"});
}

TEST_CASE("a quote that is out of place is refused where it stands", "[import][delimited]") {
    CHECK(refused("a,b\nc,d\"e\n") == std::vector<std::string>{"stock.csv:2:4: a quote stands inside a field that does not begin with one"});
    CHECK(refused("a,b\nc,\"d\"e\n") == std::vector<std::string>{"stock.csv:2:6: text follows the quote that closes its field"});
    CHECK(refused("a,b\nc,\"d\ne,f\n") == std::vector<std::string>{"stock.csv:2:3: this quote is never closed"});
    CHECK(refused("a,b\nc,\"d \"\"e\"\"\n") == std::vector<std::string>{"stock.csv:2:3: this quote is never closed"});
    CHECK(refused("\"a\",µ\"\n") == std::vector<std::string>{"stock.csv:1:6: a quote stands inside a field that does not begin with one"});
}

TEST_CASE("text that is not UTF-8 is refused at its first bad byte", "[import][delimited]") {
    // RFC 3629, section 4: overlong forms, surrogates and what lies above U+10FFFF are no UTF-8.
    for (const char* bad : {"\xB5", "\xC3", "\xE2\x82", "\xC0\xAF", "\xE0\x80\xAF", "\xED\xA0\x80", "\xF4\x90\x80\x80", "\xF5\x80\x80\x80", "\xF0\x80\x80\x80"})
        CHECK(refused("a,b\nµ," + std::string(bad)) == std::vector<std::string>{"stock.csv:2:3: the text is not UTF-8 here; save the file as UTF-8"});
    CHECK(texts("\xF0\x9F\x94\x8C,\xEF\xBF\xBD\n").front().size() == 2);
}

TEST_CASE("what is written field by field is read back the same", "[import][delimited][property]") {
    rc::prop("quoting keeps every text, with any delimiter and any line end", [] {
        const auto letter = rc::gen::element<std::string>("a", "7", " ", ",", ";", "\t", "\"", "\n", "#", "µ");
        const char delimiter = *rc::gen::element(',', ';', '\t');
        const std::string end = *rc::gen::element<std::string>("\n", "\r\n", "\r");
        const int columns = *rc::gen::inRange(2, 5), count = *rc::gen::inRange(1, 6);
        Texts table;
        std::string text;
        for (int r = 0; r < count; ++r) {
            table.emplace_back();
            for (int c = 0; c < columns; ++c) {
                std::string cell = c == 0 ? "x" : "";
                for (const std::string& piece : *rc::gen::container<std::vector<std::string>>(letter)) cell += piece;
                table.back().push_back(cell);
                text += (c == 0 ? "" : std::string(1, delimiter)) + quoted(cell);
            }
            text += end;
        }
        RC_ASSERT(texts(text) == table);
    });
}

TEST_CASE("no text makes the reader of delimited text fail in any other way than by saying why", "[import][delimited][property]") {
    rc::prop("any bytes are read or refused with a place", [] {
        std::string text;
        for (const std::string& piece : *rc::gen::container<std::vector<std::string>>(
                 rc::gen::element<std::string>("a", "\"", ",", ";", "\t", "\n", "\r", "#", " ", "µ", "\xB5", std::string(1, '\0'))))
            text += piece;
        try {
            for (const Row& row : read_delimited(text, "stock.csv"))
                for (const Field& field : row) RC_ASSERT(field.line > 0 && field.column > 0);
        } catch (const InputError& error) {
            RC_ASSERT(error.faults.size() == 1U);
            RC_ASSERT(error.faults.front().place.line > 0 && error.faults.front().place.column > 0);
        }
    });
}
