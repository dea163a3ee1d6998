// SPDX-License-Identifier: GPL-3.0-or-later
// Records as JSON: figures inside the bin, and edits in its history. Numbers keep every bit.
#pragma once
#include <nlohmann/json.hpp>

#include "catalog/store.hpp"

namespace binwright {

[[nodiscard]] nlohmann::json to_json(const Figure& figure);
[[nodiscard]] Figure figure_from_json(const nlohmann::json& json, Family family);
[[nodiscard]] nlohmann::json to_json(const Edit& edit);
[[nodiscard]] Edit edit_from_json(const nlohmann::json& json);

}  // namespace binwright
