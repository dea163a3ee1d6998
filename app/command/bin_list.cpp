// SPDX-License-Identifier: GPL-3.0-or-later
// `bin list`: the lots, or the part types.
#include <algorithm>

#include "app/command/bin.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"

namespace binwright {
namespace {

int run(Session& session, const Call& call) {
    std::optional<Family> family;
    if (const auto text = call.text("--family")) {
        family = find_family(*text);
        if (!family) throw InputError(Fault{{}, "--family", "there is no family \"" + *text + "\"; it is switch, rectifier or capacitor", "switch, rectifier or capacitor"});
    }
    const std::string place = call.text("--place").value_or("");
    const OpenBin bin = bin_for_reading(session);
    if (call.has("--types")) {
        std::vector<PartRecord> parts = bin.store.parts();
        std::erase_if(parts, [&](const PartRecord& record) { return family && record.part.family != *family; });
        if (session.json) {
            Json list = Json::array();
            for (const PartRecord& record : parts) {
                Json entry = {{"part", record.part.name}, {"family", std::string(to_string(record.part.family))}, {"starter", record.starter}, {"attributes", record.part.attributes}};
                entry["figures"] = Json::array();
                for (const Figure& figure : record.part.figures) entry["figures"].push_back(json_of(figure));
                list.push_back(std::move(entry));
            }
            print_json(session, "bin list", {{"bin", bin.name}, {"types", list}});
            return 0;
        }
        Rows rows;
        for (const PartRecord& record : parts) rows.rows.push_back({std::string(to_string(record.part.family)), record.part.name});
        session.out << rows.text() << counted(parts.size(), "type") << " in " << bin.name << '\n';
        return 0;
    }
    std::vector<LotRecord> lots = bin.store.lots();
    std::erase_if(lots, [&](const LotRecord& lot) {
        if (!place.empty() && lot.place != place && !lot.place.starts_with(place + " /")) return true;
        return family && part_of(bin.store, lot).part.family != *family;
    });
    std::ranges::sort(lots, {}, &LotRecord::number);
    if (session.json) {
        print_json(session, "bin list", {{"bin", bin.name}, {"lots", lot_list(bin.store, lots)}});
        return 0;
    }
    session.out << lot_rows(bin.store, lots);
    if (!session.quiet) session.out << counted(lots.size(), "lot") << " in " << bin.name << '\n';
    return 0;
}

}  // namespace

Command bin_list_command() {
    return {.name = "bin list",
            .summary = "the lots of the bin: label, pieces, type, origin, place",
            .about = "",
            .options = {{"--family", "WHICH", "switch, rectifier or capacitor alone"},
                        {"--place", "PATH", "what lies there, or in a place within it"},
                        {"--types", "", "the part types instead of the lots"}},
            .example = "binwright --bin demo bin list --family rectifier",
            .example_says = "the rectifiers of the demo bin",
            .run = run};
}

}  // namespace binwright
