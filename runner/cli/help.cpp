#include "runner/cli/help.hpp"

#include <algorithm>

#include "runner/cli/exit_status.hpp"
#include "runner/cli/options.hpp"
#include "runner/world/cautions.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr std::size_t help_columns = 80;
constexpr std::size_t text_column = 20;

/// `key` at `indent`, `text` in lines from `column` on.
std::string entry(std::size_t indent, std::string_view key, std::string_view text, std::size_t column) {
    std::string out, line = std::string(indent, ' ') + std::string(key);
    if (columns_of(line) + 2 > column && !key.empty()) {
        out = line + "\n";
        line.clear();
    }
    line += std::string(column - std::min(column, columns_of(line)), ' ');
    bool first = true;
    while (!text.empty()) {
        const std::size_t length = std::min(text.find(' '), text.size());
        const std::string_view word = text.substr(0, length);
        text.remove_prefix(std::min(length + 1, text.size()));
        if (!first && columns_of(line) + 1 + columns_of(word) > help_columns) {
            out += line + "\n";
            line = std::string(column, ' ');
            first = true;
        }
        line += (first ? "" : " ") + std::string(word);
        first = false;
    }
    return out + line + "\n";
}

bool holds(const std::vector<Command>& commands, Command command) {
    return std::find(commands.begin(), commands.end(), command) != commands.end();
}

/// "--rig RIG", "-v, --verbose"
std::string typed(const OptionSpec& option) {
    std::string text = option.short_name.empty() ? "" : std::string(option.short_name) + ", ";
    text += option.name;
    return option.argument.empty() ? text : text + " " + std::string(option.argument);
}

/// "halflsb check PLAN --rig RIG"
std::string form_of(const CommandSpec& command) {
    std::string form = "halflsb " + std::string(command.name);
    if (!command.operand.empty()) form += " " + std::string(command.operand);
    if (!command.second.empty()) form += " " + std::string(command.second);
    if (!command.optional.empty()) form += " [" + std::string(command.optional) + "]";
    for (const OptionSpec& option : option_table()) {
        if (holds(option.needed_by, command.command)) form += " " + typed(option);
    }
    return form;
}

/// "check, predict"; "" for an option that every command knows.
std::string commands_of(const OptionSpec& option) {
    if (option.commands.size() == command_table().size()) return "";
    std::string text;
    for (const CommandSpec& command : command_table()) {
        if (holds(option.commands, command.command)) text += (text.empty() ? "" : ", ") + std::string(command.name);
    }
    return text;
}

std::string sentence_of(const OptionSpec& option) {
    std::string text = std::string(option.help);
    if (!option.default_text.empty()) text += " (without it: " + std::string(option.default_text) + ")";
    const std::string commands = commands_of(option);
    return commands.empty() ? text + "." : text + ". For " + commands + ".";
}

}  // namespace

std::string full_help() {
    std::string out = "halflsb: does the filter in the firmware still do what its design says?\n\n";
    out += "usage:\n";
    for (const CommandSpec& command : command_table()) out += "  " + form_of(command) + " [options]\n";
    out += "  halflsb --help | --version\n\ncommands:\n";
    for (const CommandSpec& command : command_table()) {
        out += entry(2, command.name, std::string(command.help) + ".", text_column);
    }
    out += "\noptions:\n";
    for (const OptionSpec& option : option_table()) out += entry(2, typed(option), sentence_of(option), text_column);
    out += entry(2, "-h, --help", "This text.", text_column);
    out += entry(2, "--version", "The version.", text_column);
    out += "\nexit status:\n";
    for (const ExitStatus& status : exit_statuses()) {
        std::string number = std::to_string(status.number);
        number.insert(0, 3 - number.size(), ' ');
        out += entry(2, number, status.meaning, 7);
    }
    out += "\nexamples:\n";
    for (const CommandSpec& command : command_table()) out += "  " + std::string(command.example) + "\n";
    out += "\ncautions:\n";
    for (const std::string_view caution : cautions()) out += entry(2, "", caution, 2);
    return out;
}

std::string short_usage() {
    std::string out;
    for (const CommandSpec& command : command_table()) {
        out += (out.empty() ? "usage: " : "       ") + form_of(command) + "\n";
    }
    return out + "       halflsb --help\nexample: " + std::string(command_table().front().example) + "\n";
}

std::string command_reference() {
    std::string out;
    for (const CommandSpec& command : command_table()) {
        out += "## halflsb " + std::string(command.name) + "\n\n    " + form_of(command) + " [options]\n\n" +
               std::string(command.help) + ".\n\n";
        out += "| option | what it does | without it |\n|---|---|---|\n";
        for (const OptionSpec& option : option_table()) {
            if (!holds(option.commands, command.command)) continue;
            const std::string without = !holds(option.needed_by, command.command) ? std::string(option.default_text)
                                        : option.unless.empty()                   ? "refused"
                                                                : "refused, except with " + std::string(option.unless);
            out += "| `" + typed(option) + "` | " + std::string(option.help) + ". | " +
                   (without == option.default_text && without.find('/') != std::string::npos ? "`" + without + "`"
                                                                                             : without) +
                   " |\n";
        }
        out += "\nExample: `" + std::string(command.example) + "`\n\n";
    }
    return out;
}

}  // namespace halflsb
