// SPDX-License-Identifier: GPL-3.0-or-later
// What is wrong with a call or an input, word for word, with its place; and that nothing is touched by it.
#include <catch2/catch.hpp>
#include <filesystem>
#include <map>
#include <sstream>

#include "tests/app/command/program.hpp"

using namespace binwright::testing;

namespace {

struct BadCall {
    std::vector<std::string> call;
    std::string message;  ///< the whole of standard error
};

void check_all(const Folder& folder, const std::vector<BadCall>& calls) {
    const std::vector<std::string> before = folder.files();
    for (const BadCall& bad : calls) {
        std::string text;
        for (const std::string& word : bad.call) text += word + " ";
        INFO(text);
        const Answer answer = folder.run(bad.call);
        CHECK(answer.status == 2);
        CHECK(answer.err == bad.message + "\n");
        CHECK(answer.out.empty());
    }
    CHECK(folder.files() == before);
}

}  // namespace

TEST_CASE("a call that cannot be understood ends in 2 and one sentence", "[app][faults]") {
    const Folder folder;
    check_all(folder, {
        {{"chekc", "x"}, "unknown command `chekc`; did you mean `check`?"},
        {{"bin", "ad"}, "unknown command `bin ad`; did you mean `bin add`?"},
        {{"bin"}, "`binwright bin` needs to be told what to do; see `binwright bin --help`"},
        {{"check"}, "`binwright check` needs FILE, a converter file, or - for standard input; see `binwright check --help`"},
        {{"check", "a.toml", "b.toml"}, "nothing is expected where `b.toml` stands; see `binwright check --help`"},
        {{"check", "--jsno", "a.toml"}, "unknown option `--jsno`; did you mean `--json`?"},
        {{"check", "a.toml", "--bin"}, "--bin needs a value: --bin PATH"},
        {{"check", "a.toml", "--bin", "x", "--bin", "y"}, "--bin is given 2 times"},
        {{"check", "a.toml", "--color=loud"}, "--color cannot be \"loud\"; it is auto, always or never"},
        {{"check", "none.toml"}, "none.toml: cannot be read: No such file or directory"},
        {{"check", "."}, ".: cannot be read: it is a folder"},
        {{"rank", "none.toml", "switch", "--prefer", "cold"}, "--prefer cannot be \"cold\"; it is headroom, cool, life or thrift"},
        {{"rank", "none.toml", "switch", "-n", "0"}, "--most is \"0\"; it must be a whole number between 1 and 1000000"},
        {{"new", "bost"}, "there is no topology \"bost\"; did you mean \"boost\"?"},
        {{"new", "boost", "--input", "15 V .. 9 V"}, "--input: the lowest, 15 V, is above the highest, 9 V"},
        {{"rulebook", "show", "huose"}, "there is no rulebook \"huose\", neither shipped nor as a file; did you mean \"house\"?"},
        {{"help", "fgures"}, "there is no help on \"fgures\"; did you mean \"figures\"?"},
        {{"bin", "list", "--bin", "none.binwright"}, "none.binwright: there is no such bin; `binwright bin add` makes one"},
    });
}

TEST_CASE("with --json a fault is one object of errors on standard error, with every field", "[app][faults]") {
    const Folder folder;
    folder.write("bad.toml", source_file("tests/broken/converter-ten-faults.toml"));
    const Answer answer = folder.run({"check", "bad.toml", "--json"});
    CHECK(answer.status == 2);
    CHECK(answer.out.empty());
    const nlohmann::json errors = answer.errors();
    CHECK(errors.size() == 11);
    for (const auto& error : errors) {
        CHECK(error.size() == 6);
        for (const char* field : {"file", "line", "column", "field", "message", "expected"}) CHECK(error.contains(field));
        CHECK(error.at("file") == "bad.toml");
        CHECK(error.at("line").is_number_integer());
        CHECK(error.at("column").is_number_integer());
    }
    const nlohmann::json call = folder.run({"check", "--json"}).errors();
    REQUIRE(call.size() == 1);
    CHECK(call[0].at("file").is_null());
    CHECK(call[0].at("field") == "FILE");
}

TEST_CASE("every kind of broken converter file ends in 2 with file, line, column and its sentence", "[app][faults]") {
    const Folder folder;
    std::map<std::string, std::vector<std::string>> expected;
    std::istringstream lines(source_file("tests/broken/converter-messages.txt"));
    for (std::string line; std::getline(lines, line);)
        if (!line.starts_with('#') && !line.empty()) expected[line.substr(0, line.find(':'))].push_back(line);
    REQUIRE(expected.size() > 50);
    for (const auto& [file, messages] : expected) {
        INFO(file);
        folder.write(file, source_file("tests/broken/" + file));
        for (const char* command : {"check", "stress"}) {
            const Answer answer = folder.run({command, file});
            CHECK(answer.status == 2);
            CHECK(answer.out.empty());
            std::istringstream said(answer.err);
            std::size_t count = 0;
            for (std::string line; std::getline(said, line); ++count) {
                INFO(line);
                bool known = false;
                for (const std::string& message : messages) {
                    const std::size_t more = message.find("…");  // a quantity's own sentence follows
                    known = known || (more == std::string::npos ? line == message : line.starts_with(message.substr(0, more)) && line.size() > more);
                }
                CHECK(known);
            }
            CHECK(count == messages.size());
        }
    }
}

TEST_CASE("a quantity that cannot be meant is refused with its place, what is wrong and what was expected", "[app][faults]") {
    const Folder folder;
    const auto add = [](const std::string& figure) { return std::vector<std::string>{"bin", "add", "rectifier", "a rectifier", "--figure", figure}; };
    const std::string both = "--figure: in \"V_RRM=60\" at character 7: 60 has no unit, and V_RRM needs one. Write 60 V.";
    check_all(folder, {
        {{"bin", "add", "rectifier", "a rectifier", "--figure", "V_RRM=60", "--figure", "V_RRM", "--attribute", "colour=red", "--figure", "V_F=0.5 V"},
         both + "\n--figure: \"V_RRM\" is not NAME=VALUE\n--attribute: a rectifier has no attribute `colour`; it is one of technology, pins, tab, package, arrangement, legs_used"},
        {add("V_RRM=60"), "--figure: in \"V_RRM=60\" at character 7: 60 has no unit, and V_RRM needs one. Write 60 V."},
        {add("V_RRM=60 A"), "--figure: in \"V_RRM=60 A\" at character 10: \"A\" is a current, not a voltage"},
        {add("V_RRM= V"), "--figure: in \"V_RRM= V\" at character 8: a number is missing before \"V\""},
        {add("V_RRM=60 xV"), "--figure: in \"V_RRM=60 xV\" at character 10: unknown prefix \"x\" before V"},
        {add("V_RRM=nan V"), "--figure: in \"V_RRM=nan V\" at character 7: \"nan V\" is not a number that can be computed with"},
        {add("V_RRM=inf V"), "--figure: in \"V_RRM=inf V\" at character 7: \"inf V\" is not a number that can be computed with"},
        {add("I_F(AV)=1,234 A"), "--figure: in \"I_F(AV)=1,234 A\" at character 9: \"1,234\" can be read as 1.234 or as 1234; write the one that is meant"},
        {add("V_F=0.7 .. 0.6 V"), "--figure: in \"V_F=0.7 .. 0.6 V\" at character 5: the best value stands first, and here lower is better"},
        {add("V_F=0.6 V @ 15"), "--figure: in \"V_F=0.6 V @ 15\" at character 13: the condition \"15\" has no unit that tells what it is"},
        {add("V_RRM"), "--figure: \"V_RRM\" is not NAME=VALUE"},
        {add("Vrmm=60V"), "--figure: a rectifier has no figure `Vrmm`; did you mean `Vrrm`?"},
        {add("V_RRM=60 kV"), "--figure: V_RRM of 60 kV is outside what such a part can be (10 V to 3 kV); add --sure if it is meant"},
        {{"bin", "add", "capacitor", "a capacitor", "--figure", "C=470uF", "--figure", "ESR=38 ohm", "--attribute", "technology=aluminium"},
         "--figure: an ESR of 38 Ω on 470 µF is far beyond even a dried-out part; add --sure if it is meant"},
        {{"bin", "add", "rectifier", "a rectifier", "--attribute", "technology=shottky"},
         "--attribute: `technology` cannot be \"shottky\"; did you mean \"schottky\"?"},
        {{"bin", "add", "rectifier", "a rectifier", "--attribute", "colour=red"},
         "--attribute: a rectifier has no attribute `colour`; it is one of technology, pins, tab, package, arrangement, legs_used"},
        {{"bin", "add", "diode", "a diode"}, "there is no family \"diode\"; it is switch, rectifier or capacitor"},
        {{"bin", "add", "no such type"}, "there is no type \"no such type\" in this bin; name its family to make it: bin add FAMILY NAME --figure …"},
        {{"bin", "add", "switch", "a switch", "--count", "-1"}, "--count is \"-1\"; it must be a whole number between 0 and 1000000"},
        {{"bin", "add", "switch", "a switch", "--origin", "found"}, "--origin: \"found\" is no origin; it is new, surplus or pulled"},
        {{"bin", "add", "switch", "a switch", "--known", "measured"},
         "figures of a type are not measured; readings of a lot are added with `binwright bin measure`"},
        {{"bin", "add", "switch", "a switch", "--known", "kind", "--figure", "V_DSS=60V"}, "V_DSS is a rating: it is printed or published, never typical of a kind"},
        {{"bin", "take", "1"}, folder.path("own bin.binwright").string() + ": there is no bin yet; `binwright bin add` makes one"},
        {{"bin", "undo"}, folder.path("own bin.binwright").string() + ": there is no bin yet, and nothing to undo"},
    });
}
