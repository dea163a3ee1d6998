// SPDX-License-Identifier: GPL-3.0-or-later
// The bin on disk: part types, lots and readings in SQLite. Every change is an Edit; applying one returns its inverse.
#pragma once
#include <cstdint>
#include <memory>
#include <stdexcept>
#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "engine/part/part.hpp"

namespace binwright {

/// A part type of the bin. Its figures are those printed or published, or `kind` spreads; no readings.
struct PartRecord {
    std::int64_t id = 0;  ///< 0 = not stored yet
    Part part;
    bool starter = false;  ///< came with the program
    friend bool operator==(const PartRecord&, const PartRecord&) = default;
};

struct LotRecord {
    std::int64_t id = 0;     ///< permanent; 0 = not stored yet
    std::int64_t number = 0; ///< running number of the label; 0 = give the next free one (numbers are never used again)
    std::int64_t part_id = 0;
    int count = 1;           ///< ≥ 0
    std::string place;       ///< nested: "Shed / grey cabinet / A3"; empty = not placed
    Origin origin = Origin::new_;
    std::string date_code;
    std::string donor;       ///< what it was pulled from
    std::string note;
    friend bool operator==(const LotRecord&, const LotRecord&) = default;
};

/// One measurement on a lot.
struct ReadingRecord {
    std::int64_t id = 0;  ///< 0 = not stored yet
    std::int64_t lot_id = 0;
    Figure figure;        ///< known = measured
    bool set_aside = false;
    friend bool operator==(const ReadingRecord&, const ReadingRecord&) = default;
};

/// One row as it was and as it is to be: no `before` adds it, no `after` removes it. Swapping them takes it back.
template <class Record>
struct Change {
    std::optional<Record> before, after;
};

/// A change of the bin, applied in one transaction or not at all.
struct Edit {
    std::string what;  ///< for the history, e.g. "take 2 of 417-H"
    std::vector<std::variant<Change<PartRecord>, Change<LotRecord>, Change<ReadingRecord>>> changes;
};

struct HistoryEntry {
    std::int64_t id = 0;
    std::string when;  ///< ISO 8601, UTC
    std::string what;
    bool undone = false;
};

/// The machine failed (disk, lock, not a bin, newer schema …): exit status 4. The text is a sentence with the path.
class StoreError : public std::runtime_error {
  public:
    using std::runtime_error::runtime_error;
};

/// An edit does not fit the bin as it is (row changed meanwhile, count below zero, name taken): nothing was changed.
class EditRefused : public std::runtime_error {
  public:
    using std::runtime_error::runtime_error;
};

class Store {
  public:
    enum class Open { create, existing, read_only };
    /// Opens a bin (WAL, foreign keys on, STRICT tables, application id), migrating an older schema in one transaction
    /// after a backup beside it. read_only and existing never create a file. ":memory:" is allowed.
    /// @throws StoreError
    explicit Store(const std::string& path, Open how = Open::create);
    ~Store();
    Store(Store&&) noexcept;
    Store& operator=(Store&&) noexcept;

    /// One transaction; records it in the history; returns the edit that takes it back (with the ids that were given).
    /// @throws EditRefused, StoreError; then nothing has changed
    Edit apply(const Edit& edit);
    /// Takes back the newest not undone entry / applies the newest undone one again. Empty when there is none.
    std::optional<HistoryEntry> undo();
    std::optional<HistoryEntry> redo();
    [[nodiscard]] std::vector<HistoryEntry> history(int most = 100) const;  ///< newest first

    [[nodiscard]] std::vector<PartRecord> parts() const;
    [[nodiscard]] std::vector<LotRecord> lots() const;
    [[nodiscard]] std::vector<ReadingRecord> readings(std::int64_t lot_id) const;
    [[nodiscard]] std::optional<PartRecord> part(std::int64_t id) const;
    [[nodiscard]] std::optional<PartRecord> part_named(std::string_view name) const;  ///< case ignored
    [[nodiscard]] std::optional<LotRecord> lot(std::int64_t id) const;
    /// "417-H", "417h", "417": the check letter is verified when given. @throws EditRefused on a wrong check letter
    [[nodiscard]] std::optional<LotRecord> lot_labelled(std::string_view label) const;

    /// Words of text matched against name, attributes, figures as printed, place, note, label; all must match. A piece may
    /// be symbol-op-quantity: "V_RRM>=60V", "family:rectifier", "origin:pulled", "place:Shed".
    [[nodiscard]] std::vector<LotRecord> find(std::string_view query) const;

    /// The lots of one family (or all) as the engine judges them: the type's figures with the worst reading not set aside
    /// put in place of what it measures, ratings never measured up, readings outside the type's limits marking it suspect.
    [[nodiscard]] std::vector<Lot> engine_lots(std::optional<Family> family = {}) const;
    [[nodiscard]] std::optional<Lot> engine_lot(std::string_view label_or_part_name) const;

    /// Changes whenever the stored data do (for views that must know when to reload).
    [[nodiscard]] std::int64_t revision() const;

  private:
    struct Inside;
    std::unique_ptr<Inside> inside_;
};

/// "417-H": running number and check letter. Any single wrong digit and any swap of neighbours changes the letter.
[[nodiscard]] std::string lot_label(std::int64_t number);

/// Merges a type and its readings as engine_lots does (pure; for tests and for the window's preview).
[[nodiscard]] Lot as_lot(const PartRecord& part, const LotRecord& lot, const std::vector<ReadingRecord>& readings);

/// The edits that the window and the command line offer, built from the present state; nothing is changed by building one.
[[nodiscard]] Edit take_edit(const Store& store, const LotRecord& lot, int count);
[[nodiscard]] Edit put_edit(const Store& store, const LotRecord& lot, int count, const std::string& place);

/// The bin file used when none is named: BINWRIGHT_BIN, else XDG data home, else ~/.local/share.
[[nodiscard]] std::string default_bin_path();

}  // namespace binwright
