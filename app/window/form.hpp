// SPDX-License-Identifier: GPL-3.0-or-later
// A small dialog of named fields that says beneath each what is wrong with it, and closes only when nothing is.
#pragma once
#include <QComboBox>
#include <QDialog>
#include <QFormLayout>
#include <QLabel>
#include <QLineEdit>
#include <QPushButton>
#include <functional>
#include <map>

namespace binwright {

class Form : public QDialog {
    Q_OBJECT
  public:
    /// `accept` is called with the form on OK; what it throws (InputError, EditRefused …) is shown and the form stays.
    Form(const QString& name, const QString& title, std::function<void(Form&)> accept, QWidget* parent = nullptr);
    QLineEdit* text(const QString& key, const QString& caption, const QString& value = {}, const QString& hint = {});
    QComboBox* choice(const QString& key, const QString& caption, const QStringList& choices, const QString& value = {}, bool editable = false);
    void note(const QString& text);
    [[nodiscard]] QString value(const QString& key) const;
    [[nodiscard]] std::string string(const QString& key) const { return value(key).toStdString(); }
    /// Says what is wrong with a field; the form will not close. Empty key: of the form as a whole.
    void complain(const QString& key, const QString& text);
    /// Checked whenever the field is edited: throws what is wrong.
    void check(const QString& key, std::function<void(const QString&)> test);

  private:
    struct Entry {
        QWidget* edit;
        QLabel* trouble;
        std::function<void(const QString&)> test;
    };
    QFormLayout* rows_;
    QLabel* trouble_;
    std::map<QString, Entry> entries_;
    std::function<void(Form&)> accept_;
    bool wrong_ = false;
    void add(const QString& key, const QString& caption, QWidget* edit);
    void test(const QString& key);
    void finish();
};

/// The words of an error of the engine or the store.
[[nodiscard]] QString trouble_text(const std::exception& error);

}  // namespace binwright
