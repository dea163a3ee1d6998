// SPDX-License-Identifier: GPL-3.0-or-later
// One value changed: beside the file (KEY=VALUE), or in its text with everything else kept to the byte.
#include <catch2/catch.hpp>
#include <fstream>
#include <sstream>

#include "engine/converter/converter.hpp"

using namespace binwright;

namespace {

std::string demo() {
    std::ifstream stream(std::string(BINWRIGHT_SOURCE) + "/app/demo/tide-gauge.toml", std::ios::binary);
    std::stringstream text;
    text << stream.rdbuf();
    return text.str();
}

std::vector<std::string> lines(const std::string& text) {
    std::vector<std::string> out;
    std::size_t at = 0;
    while (at < text.size()) {
        const auto end = std::min(text.find('\n', at), text.size() - 1) + 1;
        out.push_back(text.substr(at, end - at));
        at = end;
    }
    return out;
}

std::vector<Fault> faults_with(const std::string& text, const std::vector<std::string>& changes) {
    try {
        (void)read_converter(text, "x.toml", changes);
    } catch (const InputError& error) {
        return error.faults;
    }
    return {};
}

// A value for every key, unlike the one in the demo, and how to see it in what was read.
struct Change {
    const char *key, *value;
    double (*seen)(const Converter&);
    double expected;
};
#define SEES(what) [](const Converter& c) -> double { return what; }
const Change kChanges[] = {
    {"operating.input_voltage", "10 V .. 14 V", SEES(c.operating.input_voltage.lowest), 10},
    {"operating.output_voltage", "[\"9 V\", \"18 V\"]", SEES(c.operating.output_voltage.highest), 18},
    {"output_current", "0.2 A .. 3 A", SEES(c.operating.output_current.highest), 3},
    {"operating.frequency", "80 kHz", SEES(c.operating.frequency.highest), 80e3},
    {"operating.ambient", "-20 °C .. 40 °C", SEES(c.operating.ambient.lowest), 253.15},
    {"operating.load", "resistance", SEES(c.operating.load == LoadKind::resistance), 1},
    {"operating.output_tolerance", "2 %", SEES(c.operating.output_tolerance.value()), 0.02},
    {"operating.output_ripple", "100 mV", SEES(c.operating.output_ripple.value()), 0.1},
    {"operating.life", "1000 h", SEES(c.operating.life.value()), 3.6e6},
    {"operating.typical.ambient", "25 °C", SEES(c.operating.typical->ambient), 298.15},
    {"operating.typical.frequency", "100 kHz", SEES(c.operating.typical->frequency), 1e5},
    {"source.resistance", "50 mΩ", SEES(c.source->resistance), 0.05},
    {"source.surge", "24 V", SEES(c.source->surge.value()), 24},
    {"source.switched", "false", SEES(c.source->switched), 0},
    {"winding.coupling", "0.95", SEES(c.winding.coupling->highest), 0.95},
    {"winding.turns_ratio", "1.5", SEES(c.winding.turns_ratio), 1.5},
    {"winding.primary.inductance", "47 µH", SEES(c.winding.primary->inductance), 47e-6},
    {"winding.primary.turns", "22", SEES(c.winding.primary->turns.value()), 22},
    {"winding.primary.core", "ferrite", SEES(c.winding.primary->core == "ferrite"), 1},
    {"winding.primary.steinmetz", "[2.5, 1.4, 2.3]", SEES(c.winding.primary->steinmetz.at(1)), 1.4},
    {"winding.secondary.tolerance", "20 %", SEES(c.winding.secondary->tolerance.value()), 0.2},
    {"drive.voltage", "11 V .. 13 V", SEES(c.drive.voltage->lowest), 11},
    {"drive.maximum_duty", "80 %", SEES(c.drive.maximum_duty.value()), 0.8},
    {"drive.sense_threshold", "0.95 V .. 1.05 V", SEES(c.drive.sense_threshold->highest), 1.05},
    {"drive.slope_compensation", "0.2 A/us", SEES(c.drive.slope_compensation.value()), 2e5},
    {"drive.short_circuit", "latch", SEES(c.drive.short_circuit == "latch"), 1},
    {"feedback.lower", "6.8 kΩ", SEES(c.feedback.lower.value()), 6800},
    {"fuse.rating", "8 A", SEES(c.fuse.rating.value()), 8},
    {"fuse.melting", "60 A2s", SEES(c.fuse.melting.value()), 60},
    {"clamp.voltage", "80 V", SEES(c.clamp.voltage.value()), 80},
    {"heatsink.small.resistance", "3 K/W", SEES(c.heatsinks.at("small")), 3},
    {"heatsink.roof.resistance", "1 K/W", SEES(c.heatsinks.at("roof")), 1},
    {"enclosure.resistance", "4 K/W", SEES(c.enclosure.value()), 4},
    {"seat.switch.heatsink", "large", SEES(c.seat(Seat::switch_).heatsink == "large"), 1},
    {"seat.switch.overshoot", "6 V @ 10 A", SEES(c.seat(Seat::switch_).overshoot->at_current.value()), 10},
    {"seat.rectifier.interface", "0.5 K/W", SEES(c.seat(Seat::rectifier).interface_resistance.value()), 0.5},
    {"seat.output_capacitor.fitted", "118-K", SEES(c.seat(Seat::output_capacitor).fitted.at(0).lot == "118-K"), 1},
    {"seat.output_capacitor.count", "3", SEES(c.seat(Seat::output_capacitor).count), 3},
    {"seat.output_capacitor.warmer_by", "12 K", SEES(c.seat(Seat::output_capacitor).warmer_by), 12},
    {"seat.input_capacitor.reference", "C17", SEES(c.reference(Seat::input_capacitor) == "C17"), 1},
    {"seat.coupling_capacitor.element.capacitance", "47 µF",
     SEES(c.seat(Seat::coupling_capacitor).element->capacitance.value()), 47e-6},
    {"seat.switch.element.resistance", "20 mΩ", SEES(c.seat(Seat::switch_).element->resistance.value()), 0.02},
    {"seat.switch.figures.I_D", "40 A", SEES(c.seat(Seat::switch_).figures.back().symbol == Symbol::I_D), 1},
    {"title", "Quoted \"twice\", with a \\ in it", SEES(c.title == "Quoted \"twice\", with a \\ in it"), 1},
};

}  // namespace

TEST_CASE("a value changed in a file is read back, and every other line is the same byte for byte",
          "[engine][converter][property]") {
    const std::string before = demo();
    for (const Change& change : kChanges) {
        INFO(change.key << " = " << change.value);
        const std::string after = change_converter_text(before, "tide.toml", change.key, change.value);
        CHECK(change.seen(read_converter(after, "tide.toml")) == Approx(change.expected));
        // Taken from the front and from the back, all lines but the changed or added ones are those of before.
        const auto old_lines = lines(before), new_lines = lines(after);
        std::size_t front = 0, back = 0;
        while (front < old_lines.size() && front < new_lines.size() && old_lines[front] == new_lines[front]) ++front;
        while (back < old_lines.size() - front && back < new_lines.size() - front &&
               old_lines[old_lines.size() - 1 - back] == new_lines[new_lines.size() - 1 - back])
            ++back;
        CHECK(old_lines.size() - front - back <= 1);
        CHECK(new_lines.size() - front - back <= 3);
        // Given beside the file, the same change means the same.
        const Converter beside = read_converter(before, "tide.toml", {std::string(change.key) + "=" + change.value});
        CHECK(change.seen(beside) == Approx(change.expected));
    }
}

TEST_CASE("the comment behind a changed value stays", "[engine][converter]") {
    const std::string text =
        "topology = \"buck\" # kind\n[operating] # here\ninput_voltage='12 V'\t# \"not\" this\noutput_voltage = [ \"3 "
        "V\", # "
        "low\n  \"5 V\" ] # high\noutput_current = \"1 A\"\nfrequency = \"100 kHz\"\nambient = \"20 °C\" # °µ\n";
    CHECK(change_converter_text(text, "x", "input_voltage", "14 V") ==
          "topology = \"buck\" # kind\n[operating] # here\ninput_voltage=\"14 V\"\t# \"not\" this\noutput_voltage = [ "
          "\"3 V\", # low\n  \"5 V\" ] # high\noutput_current = \"1 A\"\nfrequency = \"100 kHz\"\nambient = \"20 °C\" "
          "# °µ\n");
    CHECK(change_converter_text(text, "x", "output_voltage", "4 V .. 5 V") ==
          "topology = \"buck\" # kind\n[operating] # here\ninput_voltage='12 V'\t# \"not\" this\noutput_voltage = [\"4 "
          "V\", "
          "\"5 V\"] # high\noutput_current = \"1 A\"\nfrequency = \"100 kHz\"\nambient = \"20 °C\" # °µ\n");
    CHECK(change_converter_text(text, "x", "ambient", "30 °C").ends_with("ambient = \"30 °C\" # °µ\n"));
}

TEST_CASE("a missing key goes where its table was written, in whichever way", "[engine][converter]") {
    const std::string plain =
        "topology = \"sepic\"\n[operating]\ninput_voltage = \"12 V\"\noutput_voltage = \"12 V\"\noutput_current = \"1 "
        "A\"\nfrequency = \"100 kHz\"\nambient = \"20 °C\"\n";
    // in braces
    const std::string braces = plain + "[seat]\nswitch = { reference = \"Q1\" } # here\n";
    CHECK(change_converter_text(braces, "x", "seat.switch.fitted", "417-H") ==
          plain + "[seat]\nswitch = { reference = \"Q1\", fitted = \"417-H\" } # here\n");
    // by dotted keys
    const std::string dots = plain + "[seat]\nswitch.reference = \"Q1\"\n";
    CHECK(change_converter_text(dots, "x", "seat.switch.fitted", "417-H") == dots + "switch.fitted = \"417-H\"\n");
    // nowhere yet, and no line end at the end
    const std::string open = plain.substr(0, plain.size() - 1);
    CHECK(change_converter_text(open, "x", "seat.switch.fitted", "417-H") ==
          plain + "\n[seat.switch]\nfitted = \"417-H\"\n");
    // a text between: the header in a text is none
    const std::string decoy = "title = \"\"\"\n[operating]\n\"\"\"\n" + plain;
    const Converter c = read_converter(change_converter_text(decoy, "x", "operating.load", "power"), "x");
    CHECK(c.operating.load == LoadKind::power);
    CHECK(c.title == "[operating]\n");
    // the line ends of another system
    std::string other;
    for (const char ch : plain) other += ch == '\n' ? "\r\n" : std::string(1, ch);
    const std::string changed = change_converter_text(other, "x", "fuse.rating", "2 A");
    CHECK(changed == other + "\r\n[fuse]\r\nrating = \"2 A\"\r\n");
}

TEST_CASE("a change that would make the file unsound is refused", "[engine][converter]") {
    const std::string before = demo();
    CHECK_THROWS_AS(change_converter_text(before, "x", "operating.output_voltage", "18 A"), InputError);
    CHECK_THROWS_AS(change_converter_text(before, "x", "operating.output_voltage", "18 V .. 9 V"), InputError);
    CHECK_THROWS_AS(change_converter_text(before, "x", "winding.leakage", "1 µH"), InputError);  // beside coupling
    CHECK_THROWS_AS(change_converter_text(before, "x", "seat.switch.heatsink", "smal"), InputError);
    CHECK_THROWS_AS(change_converter_text(before, "x", "fuse.rating", ""), InputError);
    CHECK_THROWS_AS(change_converter_text(before, "x", "seat.switch", "417-H"), InputError);
    try {
        (void)change_converter_text(before, "x", "seat.switch.fited", "417-H");
        FAIL("it was accepted");
    } catch (const InputError& error) {
        CHECK(error.faults.at(0).message == "unknown key `seat.switch.fited`; did you mean `seat.switch.fitted`?");
    }
}

TEST_CASE("changes beside the file are read as if the file said so", "[engine][converter]") {
    const std::string text = demo();
    const Converter c =
        read_converter(text, "x.toml",
                       {"output_voltage=9 V .. 18 V", "heatsink.small.resistance = 3 K/W",
                        "seat.output_capacitor.fitted=118-K", "seat.output_capacitor.count=2", "seat.switch.fitted=417",
                        "seat.rectifier.figures.Vrrm=60 V", "winding.coupling="});
    CHECK(c.operating.output_voltage.highest == Approx(18));
    CHECK(c.heatsinks.at("small") == Approx(3));
    REQUIRE(c.seat(Seat::output_capacitor).fitted.size() == 1);
    CHECK(c.seat(Seat::output_capacitor).fitted[0].lot == "118-K");
    CHECK(c.seat(Seat::output_capacitor).fitted[0].count == 2);
    CHECK(c.seat(Seat::output_capacitor).fitted[0].place.file == "--with");
    CHECK(c.seat(Seat::switch_).fitted.at(0).lot == "417");
    CHECK_FALSE(c.winding.coupling);  // an empty value takes the key out
    // A figure by its plain spelling takes the place of the one in the file.
    double rating = 0;
    int times = 0;
    for (const Figure& figure : c.seat(Seat::rectifier).figures)
        if (figure.symbol == Symbol::V_RRM) rating = figure.value.worst, ++times;
    CHECK(times == 1);
    CHECK(rating == Approx(60));
    CHECK(read_converter(text, "x.toml", {"title=true"}).title == "true");
}

TEST_CASE("a faulty change names itself and the place within it", "[engine][converter][broken]") {
    const std::string text = demo();
    auto faults = faults_with(text, {"output_voltage=18 A", "seat.switch.count=0", "fuse", "outputvoltage=1 V"});
    REQUIRE(faults.size() == 4);
    for (const Fault& fault : faults) CHECK(fault.place.file == "--with");
    faults = faults_with(text, {"output_voltage = 18 A"});
    REQUIRE(faults.size() == 1);
    CHECK(faults[0].field == "operating.output_voltage");
    CHECK(faults[0].place.column == 21);  // the A
    faults = faults_with(text, {"fuse"});
    REQUIRE(faults.size() == 1);
    CHECK(to_string(faults[0]) == "--with: `fuse` has no `=` between a key and its value");
    faults = faults_with(text, {"operating.outputvoltage=1 V"});
    REQUIRE(faults.size() == 1);
    CHECK(to_string(faults[0]) ==
          "--with: unknown key `operating.outputvoltage`; did you mean `operating.output_voltage`?");
    CHECK_FALSE(faults_with(text, {"seat.switch.fitted.lot=417-H", "operating.load.kind=power"}).empty());
}
