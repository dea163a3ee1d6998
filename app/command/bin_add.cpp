// SPDX-License-Identifier: GPL-3.0-or-later
// `bin add`: a new lot, of a type that the bin knows or of one described here.
#include <algorithm>

#include "app/command/bin.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"
#include "engine/quantity/quantity.hpp"

namespace binwright {
namespace {

InputError fault(std::string field, std::string message, std::string expected) {
    return InputError(Fault{{}, std::move(field), std::move(message), std::move(expected)});
}

Known known_of(const Call& call) {
    const std::string text = call.text("--known").value_or("told");
    const std::optional<Known> known = find_known(text);
    if (known == Known::measured)
        throw fault("--known", "figures of a type are not measured; readings of a lot are added with `binwright bin measure`", "marked, datasheet, told or kind");
    if (!known) throw fault("--known", "--known cannot be \"" + text + "\"; it is marked, datasheet, told or kind", "marked, datasheet, told or kind");
    return *known;
}

PartRecord new_type(const Session& session, const Call& call, Family family, const std::string& name) {
    PartRecord record;
    record.part.family = family;
    record.part.name = name;
    const Known known = known_of(call);
    std::vector<Fault> faults;
    const auto collect = [&](auto&& read) {
        try {
            read();
        } catch (const InputError& error) {
            faults.insert(faults.end(), error.faults.begin(), error.faults.end());
        }
    };
    for (const std::string& text : call.list("--figure"))
        collect([&] {
            const Figure figure = figure_of("--figure", text, family, known);
            if (known == Known::kind && info(figure.symbol).rating)
                throw fault(std::string(info(figure.symbol).name), std::string(info(figure.symbol).name) + " is a rating: it is printed or published, never typical of a kind",
                            "marked, datasheet or told");
            record.part.figures.push_back(figure);
        });
    for (const std::string& text : call.list("--attribute")) collect([&] { record.part.attributes.insert_or_assign(attribute_of("--attribute", text, family).first, named_text("--attribute", text).text); });
    if (!faults.empty()) throw InputError(faults);
    refuse_implausible(session, record.part, record.part.figures, "--figure");
    return record;
}

int run(Session& session, const Call& call) {
    const std::vector<std::string> words = call.list("NAME");
    if (words.size() > 2) throw fault("NAME", "a family and a name are expected, in quotes where it has spaces, not " + counted(words.size(), "word"), "[FAMILY] NAME");
    std::optional<Family> family;
    if (words.size() == 2) {
        family = find_family(words.front());
        if (!family) {
            const std::string near = nearest_word(words.front(), {"switch", "rectifier", "capacitor"});
            throw fault("FAMILY", "there is no family \"" + words.front() + "\"; " + (near.empty() ? "it is switch, rectifier or capacitor" : "did you mean \"" + near + "\"?"),
                        "switch, rectifier or capacitor");
        }
    }
    const std::string name = words.back();
    if (name.find_first_not_of(' ') == std::string::npos) throw fault("NAME", "the name of the type is empty", "a name");
    LotRecord lot;
    lot.count = call.whole("--count", 0, 1000000).value_or(1);
    lot.place = call.text("--place").value_or("");
    if (const auto origin = call.text("--origin")) lot.origin = origin_of(*origin);
    lot.date_code = call.text("--date-code").value_or("");
    lot.donor = call.text("--donor").value_or("");
    lot.note = call.text("--note").value_or("");
    const bool described = call.has("--figure") || call.has("--attribute") || call.has("--known");
    return change_bin(session, "bin add", true, [&](const Store& store) {
        Edit edit;
        edit.what = "add " + counted(static_cast<std::size_t>(lot.count), "piece") + " of " + name;
        LotRecord row = lot;
        if (const std::optional<PartRecord> known = store.part_named(name)) {
            if (family && known->part.family != *family)
                throw fault("FAMILY", "\"" + known->part.name + "\" is in this bin already, as a " + std::string(to_string(known->part.family)), "another name");
            if (described) {
                const PartRecord said = new_type(session, call, known->part.family, known->part.name);
                const bool same = std::ranges::all_of(said.part.figures, [&](const Figure& figure) { return std::ranges::find(known->part.figures, figure) != known->part.figures.end(); }) &&
                                  std::ranges::all_of(said.part.attributes, [&](const auto& entry) { return attribute(known->part, entry.first) == entry.second; });
                if (!same)
                    throw fault("NAME", "the type \"" + known->part.name + "\" is in this bin already, with other figures; `binwright bin edit` changes them, or give this one another name",
                                "a new name, or no figures");
            }
            row.part_id = known->id;
            edit.changes.emplace_back(Change<LotRecord>{std::nullopt, row});
            return edit;
        }
        if (!family) {
            const std::string near = nearest_part(store, name);
            throw fault("NAME", "there is no type \"" + name + "\" in this bin; " + (near.empty() ? std::string("name its family to make it: bin add FAMILY NAME --figure …") : "did you mean \"" + near + "\"?"),
                        "the name of a type, or a family and a name");
        }
        edit.changes.emplace_back(Change<PartRecord>{std::nullopt, new_type(session, call, *family, name)});
        row.part_id = -1;  // the first change of this edit
        edit.changes.emplace_back(Change<LotRecord>{std::nullopt, row});
        return edit;
    });
}

}  // namespace

Command bin_add_command() {
    return {.name = "bin add",
            .summary = "add a lot, of a type that the bin knows or of a new one",
            .about = "FAMILY is switch, rectifier or capacitor; it may be left out where the bin knows the type by its name. Figures are those "
                     "of the type (`binwright help figures`); what you measure on the lot itself is added with `bin measure`. Makes the bin when there is none.",
            .options = {{"NAME", "[FAMILY] NAME", "a family and a name, or the name of a known type", true, true},
                        {"--figure", "SYMBOL=VALUE", "a figure of the type: \"V_RRM=60 V\", \"Vf=0.62 V max @ 15 A, 25 °C\"; repeated", true},
                        {"--attribute", "NAME=VALUE", "technology=schottky, arrangement=\"common cathode\" …; repeated", true},
                        {"--known", "HOW", "how the figures are known: marked (printed on it), datasheet, told (else) or kind"},
                        {"--count", "N", "pieces (else 1)"},
                        {"--place", "PATH", "where it lies: \"Shed / grey cabinet / A3\""},
                        {"--origin", "WHICH", "new (else), surplus or pulled"},
                        {"--date-code", "TEXT", "as printed"},
                        {"--donor", "TEXT", "what it was pulled from"},
                        {"--note", "TEXT", "anything else"},
                        {"--sure", "", "store a value that such a part hardly has"}},
            .example = "binwright bin add rectifier \"Schottky 60 V 15 A\" --figure V_RRM=60V --figure \"I_F(AV)=15 A\" --attribute technology=schottky --known marked --count 3 --place \"Shed / A3\" --origin pulled",
            .example_says = "three pulled rectifiers of a new type, figures as printed on them",
            .run = run};
}

}  // namespace binwright
