#include "runner/board_settings.hpp"

#include <algorithm>

namespace halflsb {
namespace {

/// How long one look at the line may take while credit is awaited; the wire has deadlines of its own.
constexpr double step_s = 0.1;

std::string known_settings(const Greeting& greeting) {
    std::string text;
    for (const BoardSetting& setting : greeting.settings) {
        text += (text.empty() ? "\"" : ", \"") + setting.name + "\" (" + std::to_string(setting.minimum) + " to " +
                std::to_string(setting.maximum) + ")";
    }
    return text.empty() ? "none" : text;
}

}  // namespace

Outcome<BoardSettings> BoardSettings::agreed(const Greeting& greeting, const Plan& plan,
                                             const std::vector<std::size_t>& selected, const std::string& port) {
    BoardSettings made;
    std::vector<bool> changes(greeting.settings.size());
    for (const std::size_t index : selected) {
        const Case& the_case = plan.cases[index];
        for (const CaseSetting& wanted : the_case.settings) {
            const std::string asker = "case \"" + the_case.name + "\" (" + to_text(wanted.position) + ")";
            const auto found = std::find_if(greeting.settings.begin(), greeting.settings.end(),
                                            [&](const BoardSetting& setting) { return setting.name == wanted.name; });
            if (found == greeting.settings.end()) {
                return Error{ErrorKind::bench, port,
                             "the board has no setting \"" + wanted.name + "\", which " + asker + " changes; it has " +
                                 known_settings(greeting),
                             "correct [case.settings] of the plan, or flash the firmware that has it"};
            }
            if (wanted.value < found->minimum || wanted.value > found->maximum) {
                return Error{ErrorKind::bench, port,
                             "setting \"" + wanted.name + "\" takes " + std::to_string(found->minimum) + " to " +
                                 std::to_string(found->maximum) + ", " + asker + " wants " +
                                 std::to_string(wanted.value),
                             "correct [case.settings] of the plan, or flash the firmware it is about"};
            }
            changes[static_cast<std::size_t>(found - greeting.settings.begin())] = true;
        }
    }
    for (std::size_t number = 0; number < changes.size(); ++number) {
        const BoardSetting& setting = greeting.settings[number];
        if (changes[number]) made.touched_.push_back({number, setting.name, setting.value, setting.value, false});
    }
    return made;
}

BoardSettings::Touched* BoardSettings::find(std::size_t number) {
    for (Touched& touched : touched_)
        if (touched.number == number) return &touched;
    return nullptr;
}

std::optional<std::size_t> BoardSettings::number_of(const std::string& name) const {
    for (const Touched& touched : touched_)
        if (touched.name == name) return touched.number;
    return std::nullopt;
}

std::vector<BoardSettings::Change> BoardSettings::changes_for(const Case& the_case) const {
    std::vector<Change> changes;
    for (const Touched& touched : touched_) {
        const bool is_mentioned = std::any_of(the_case.settings.begin(), the_case.settings.end(),
                                              [&](const CaseSetting& wanted) { return wanted.name == touched.name; });
        if (!is_mentioned && touched.value != touched.at_start) changes.push_back({touched.number, touched.at_start});
    }
    for (const CaseSetting& wanted : the_case.settings)
        if (const auto number = number_of(wanted.name)) changes.push_back({*number, wanted.value});
    return changes;
}

std::vector<BoardSettings::Change> BoardSettings::changes_back() const {
    std::vector<Change> changes;
    for (const Touched& touched : touched_)
        if (touched.was_changed && touched.value != touched.at_start)
            changes.push_back({touched.number, touched.at_start});
    return changes;
}

Outcome<void> BoardSettings::make(const std::vector<Change>& changes, Wire& wire, const Clock& clock) {
    for (const Change& change : changes) {
        while (wire.room_samples() == 0)
            if (auto moved = wire.advance(clock.now() + seconds(step_s)); !moved) return moved.error();
        if (Touched* touched = find(change.number)) {
            touched->value.reset();
            touched->was_changed = touched->was_changed || change.value != touched->at_start;
        }
        wire.send_setting(change.number, change.value);
    }
    if (auto settled = wire.settle(); !settled) return settled;
    for (const Change& change : changes)
        if (Touched* touched = find(change.number)) touched->value = change.value;
    return {};
}

void BoardSettings::forget() {
    for (Touched& touched : touched_) touched.value.reset();
}

std::string BoardSettings::text_of_changed() const {
    std::string text;
    for (const Touched& touched : touched_) {
        if (!touched.was_changed || touched.value == touched.at_start) continue;
        text += (text.empty() ? "" : ", ") + touched.name + " (" + std::to_string(touched.at_start) + " at the start" +
                (touched.value ? ", now " + std::to_string(*touched.value) : "") + ")";
    }
    return text;
}

}  // namespace halflsb
