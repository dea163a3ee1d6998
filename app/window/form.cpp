// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/form.hpp"

#include <QDialogButtonBox>
#include <QVBoxLayout>

#include "app/window/ink.hpp"
#include "engine/fault.hpp"

namespace binwright {
namespace {

QLabel* trouble_label(const QString& name, QWidget* parent) {
    auto* label = new QLabel(parent);
    label->setObjectName(name);
    label->setAccessibleName("What is wrong");
    label->setWordWrap(true);
    QPalette colours = label->palette();
    colours.setColor(QPalette::WindowText, verdict_colour(Verdict::rejected, colours));
    label->setPalette(colours);
    label->hide();
    return label;
}

}  // namespace

QString trouble_text(const std::exception& error) {
    if (const auto* input = dynamic_cast<const InputError*>(&error)) {
        QStringList all;
        for (const Fault& fault : input->faults) all << qt(fault.message) + (fault.expected.empty() ? QString() : " (expected: " + qt(fault.expected) + ")");
        return all.join('\n');
    }
    return QString::fromUtf8(error.what());
}

Form::Form(const QString& name, const QString& title, std::function<void(Form&)> accept, QWidget* parent) : QDialog(parent), accept_(std::move(accept)) {
    setObjectName(name);
    setWindowTitle(title);
    setMinimumWidth(460);
    auto* column = new QVBoxLayout(this);
    rows_ = new QFormLayout;
    column->addLayout(rows_);
    trouble_ = trouble_label("form_trouble", this);
    column->addWidget(trouble_);
    auto* buttons = new QDialogButtonBox(QDialogButtonBox::Ok | QDialogButtonBox::Cancel, this);
    buttons->button(QDialogButtonBox::Ok)->setObjectName("ok");
    buttons->button(QDialogButtonBox::Cancel)->setObjectName("cancel");
    connect(buttons, &QDialogButtonBox::accepted, this, [this] { finish(); });
    connect(buttons, &QDialogButtonBox::rejected, this, &QDialog::reject);
    column->addWidget(buttons);
}

void Form::add(const QString& key, const QString& caption, QWidget* edit) {
    edit->setObjectName(key);
    edit->setAccessibleName(caption);
    rows_->addRow(caption, edit);
    QLabel* trouble = trouble_label(key + "_trouble", this);
    rows_->addRow(QString(), trouble);
    entries_[key] = {edit, trouble, {}};
}

QLineEdit* Form::text(const QString& key, const QString& caption, const QString& value, const QString& hint) {
    auto* edit = new QLineEdit(value, this);
    edit->setPlaceholderText(hint);
    add(key, caption, edit);
    connect(edit, &QLineEdit::textEdited, this, [this, key] { test(key); });
    return edit;
}

QComboBox* Form::choice(const QString& key, const QString& caption, const QStringList& choices, const QString& value, bool editable) {
    auto* box = new QComboBox(this);
    box->setEditable(editable);
    box->addItems(choices);
    if (!value.isEmpty()) box->setCurrentText(value);
    else if (editable) box->setCurrentText({});
    add(key, caption, box);
    connect(box, &QComboBox::currentTextChanged, this, [this, key] { test(key); });
    return box;
}

void Form::note(const QString& text) {
    auto* label = new QLabel(text, this);
    label->setWordWrap(true);
    rows_->addRow(label);
}

QString Form::value(const QString& key) const {
    const Entry& entry = entries_.at(key);
    if (const auto* edit = qobject_cast<const QLineEdit*>(entry.edit)) return edit->text().trimmed();
    return static_cast<const QComboBox*>(entry.edit)->currentText().trimmed();
}

void Form::complain(const QString& key, const QString& text) {
    QLabel* label = key.isEmpty() ? trouble_ : entries_.at(key).trouble;
    label->setText(text);
    label->setVisible(!text.isEmpty());
    if (!text.isEmpty()) wrong_ = true;
}

void Form::check(const QString& key, std::function<void(const QString&)> test) { entries_.at(key).test = std::move(test); }

void Form::test(const QString& key) {
    const Entry& entry = entries_.at(key);
    complain({}, {});
    complain(key, {});
    if (!entry.test) return;
    try {
        entry.test(value(key));
    } catch (const std::exception& error) {
        complain(key, trouble_text(error));
    }
}

void Form::finish() {
    wrong_ = false;
    complain({}, {});
    for (const auto& [key, entry] : entries_) test(key);
    if (wrong_) return;
    try {
        accept_(*this);
    } catch (const std::exception& error) {
        complain({}, trouble_text(error));
    }
    if (!wrong_) accept();
}

}  // namespace binwright
