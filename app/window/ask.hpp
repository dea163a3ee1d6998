// SPDX-License-Identifier: GPL-3.0-or-later
// Every question the window puts to a person goes through here, so that a test can answer it, or fail on one it did not
// expect.
#pragma once
#include <QString>
#include <optional>

class QWidget;

namespace binwright {

class Ask {
  public:
    enum class Unsaved { save, discard, stay };
    virtual ~Ask() = default;
    virtual Unsaved unsaved(QWidget* parent, const QString& name) = 0;
    virtual std::optional<QString> open_file(QWidget* parent) = 0;
    virtual std::optional<QString> save_file(QWidget* parent, const QString& proposal) = 0;
    virtual bool sure(QWidget* parent, const QString& question) = 0;
    virtual void tell(QWidget* parent, const QString& title, const QString& text) = 0;
};

/// The real one: message boxes and file dialogs.
[[nodiscard]] Ask& dialogs();

}  // namespace binwright
