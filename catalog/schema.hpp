// SPDX-License-Identifier: GPL-3.0-or-later
// The tables of a bin and the steps from each older version to the next.
#pragma once
#include <SQLiteCpp/SQLiteCpp.h>

#include <string>

namespace binwright {

inline constexpr int kApplicationId = 0x62776268;  ///< "bwbh" in the file's header: this is a bin
inline constexpr int kSchemaVersion = 2;

/// Brings an open database to the present schema: makes it new, or migrates it in one transaction.
/// @throws StoreError when it is something else than a bin, or newer than this program
void prepare_schema(SQLite::Database& database, const std::string& path, bool may_write);

}  // namespace binwright
