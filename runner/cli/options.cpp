// The parser: CLI11 splits the command line into words of the tables and values; every judgement is
// made here, so that the messages are ours. The only file that includes CLI11, which compiles slowly.
#include "runner/cli/options.hpp"

#include <CLI/CLI.hpp>
#include <algorithm>
#include <iterator>
#include <map>

#include "runner/cli/exit_status.hpp"
#include "runner/cli/help.hpp"
#include "runner/world/nearest.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr const char* help_hint = "halflsb --help shows every command and option";

Error usage_error(std::string problem, std::string remedy = help_hint) {
    return {ErrorKind::usage, "", std::move(problem), std::move(remedy)};
}

const OptionSpec* find_option(std::string_view word) {
    const auto& table = option_table();
    const auto found = std::find_if(table.begin(), table.end(), [&](const OptionSpec& option) {
        return word == option.name || (!option.short_name.empty() && word == option.short_name);
    });
    return found == table.end() ? nullptr : &*found;
}

bool knows(const OptionSpec& option, Command command) {
    return std::find(option.commands.begin(), option.commands.end(), command) != option.commands.end();
}

std::string names_of(const std::vector<Command>& commands) {
    std::string text;
    for (const CommandSpec& spec : command_table()) {
        if (std::find(commands.begin(), commands.end(), spec.command) != commands.end()) {
            text += (text.empty() ? "" : ", ") + std::string(spec.name);
        }
    }
    return text;
}

/// "--rgi=x" without its value.
std::string word_of(const std::string& argument) { return argument.substr(0, argument.find('=')); }

Error unknown_command(const std::string& word) {
    std::vector<std::string_view> known;
    for (const CommandSpec& command : command_table()) known.push_back(command.name);
    const std::string near(nearest_word(word, known));
    return usage_error("there is no command '" + printable(word) + "'",
                       near.empty() ? help_hint : "did you mean '" + near + "'?");
}

Error unknown_option(const std::string& argument, const CommandSpec* command) {
    const std::string word = word_of(argument);
    if (const OptionSpec* option = find_option(word)) {
        if (command == nullptr) return usage_error(word + " stands before the command", "write it behind the command");
        return usage_error(word + " is not an option of " + std::string(command->name),
                           "it belongs to " + names_of(option->commands));
    }
    std::vector<std::string_view> known{"--help", "--version"};
    for (const OptionSpec& option : option_table()) {
        if (command == nullptr || knows(option, command->command)) known.push_back(option.name);
    }
    const std::string near(nearest_word(word, known));
    return usage_error("there is no option '" + printable(word) + "'",
                       near.empty() ? help_hint : "did you mean " + near + "?");
}

/// What neither a command nor an option took.
Error unexpected(const std::string& argument, const CommandSpec* command) {
    if (argument.size() > 1 && argument.front() == '-') return unknown_option(argument, command);
    return unknown_command(argument);
}

Error one_too_many(const std::string& argument, const CommandSpec* command) {
    std::string takes = command->operand.empty() ? " takes none" : " takes one " + std::string(command->operand);
    if (!command->second.empty())
        takes = " takes a " + std::string(command->operand) + " and a second " + std::string(command->second);
    if (!command->optional.empty()) takes += " and at most one " + std::string(command->optional);
    return usage_error("'" + printable(argument) + "' is one operand too many", std::string(command->name) + takes);
}

Error value_missing(const OptionSpec& option) {
    return usage_error(std::string(option.name) + " needs a value",
                       "write " + std::string(option.name) + " " + std::string(option.argument));
}

/// What CLI11 would say in words of its own or not at all: an option without its value, at the end or
/// before another option, one with an empty value behind "=", a flag with any. Gives the place of the "--" that ends
/// the options, or the number of arguments.
Outcome<std::size_t> check_values(const std::vector<std::string>& arguments) {
    std::size_t i = 0;
    for (; i < arguments.size() && arguments[i] != "--"; ++i) {
        const std::string& argument = arguments[i];
        const OptionSpec* option = find_option(word_of(argument));
        if (option == nullptr) continue;
        const std::size_t equals = argument.find('=');
        if (option->argument.empty()) {
            if (equals != std::string::npos)
                return usage_error(std::string(option->name) + " takes no value", "leave out what follows it");
        } else if (equals != std::string::npos) {
            if (equals + 1 == argument.size()) return value_missing(*option);
        } else if (i + 1 == arguments.size() || arguments[i + 1] == "--" || find_option(arguments[i + 1]) != nullptr) {
            return value_missing(*option);
        } else {
            ++i;  // its value, whatever that looks like
        }
    }
    return i;
}

/// One command of the tables inside CLI11, with what it found.
struct CommandParser {
    CommandParser(CLI::App& app, const CommandSpec& spec_) : spec(&spec_) {
        parser = app.add_subcommand(std::string(spec->name));
        parser->set_help_flag();
        parser->allow_extras();
        for (const OptionSpec& option : option_table()) {
            if (!knows(option, spec->command)) continue;
            const std::string names =
                (option.short_name.empty() ? "" : std::string(option.short_name) + ",") + std::string(option.name);
            if (option.argument.empty()) {
                parser->add_flag(names, flags[option.name])->disable_flag_override();
            } else {
                parser->add_option(names, values[option.name])->expected(1)->take_all()->allow_extra_args(false);
            }
        }
    }

    /// `behind`: what stands behind "--", operands whatever they look like.
    Outcome<std::variant<Options, Answer>> options(const std::vector<std::string>& behind) const {
        Options options;
        options.command = spec->command;
        if (auto taken = take_operands(options, behind); !taken) return taken.error();
        for (const OptionSpec& option : option_table()) {
            if (!knows(option, spec->command)) continue;
            const bool needed =
                std::find(option.needed_by.begin(), option.needed_by.end(), spec->command) != option.needed_by.end();
            const std::vector<std::string> given = given_for(option);
            if (given.empty() && needed && (option.unless.empty() || flags.at(option.unless) == 0)) {
                return usage_error(
                    std::string(spec->name) + " needs " + std::string(option.name) + " " + std::string(option.argument),
                    "for example: " + std::string(spec->example));
            }
            const bool repeats =
                std::find(option.repeats.begin(), option.repeats.end(), spec->command) != option.repeats.end();
            if (given.size() > 1 && !repeats && !option.argument.empty()) {
                return usage_error(std::string(option.name) + " is given " + std::to_string(given.size()) + " times",
                                   "give it once");
            }
            for (const std::string& argument : given) {
                const std::string problem = option.take(options, argument);
                if (!problem.empty()) return usage_error(std::string(option.name) + ": " + problem);
            }
        }
        return std::variant<Options, Answer>(std::move(options));
    }

    Outcome<void> take_operands(Options& options, const std::vector<std::string>& behind) const {
        std::vector<std::string> operands = parser->remaining();
        const auto option = std::find_if(operands.begin(), operands.end(), [](const std::string& word) {
            return word.size() > 1 && word.front() == '-';
        });
        if (option != operands.end()) return unexpected(*option, spec);
        operands.insert(operands.end(), behind.begin(), behind.end());
        const std::string_view second = spec->second.empty() ? spec->optional : spec->second;
        const std::size_t most = (spec->operand.empty() ? 0u : 1u) + (second.empty() ? 0u : 1u);
        if (operands.size() > most) return one_too_many(operands[most], spec);
        if (!spec->operand.empty() && (operands.empty() || operands.front().empty())) {
            return usage_error(std::string(spec->name) + " needs a " + std::string(spec->operand),
                               "for example: " + std::string(spec->example));
        }
        if (!spec->second.empty() && operands.size() < 2) {
            return usage_error(std::string(spec->name) + " needs a second " + std::string(spec->second),
                               "for example: " + std::string(spec->example));
        }
        for (std::size_t i = 0; i < operands.size(); ++i) {
            const std::string_view name = i == 0 ? spec->operand : second;
            if (operands[i].empty()) return usage_error("the " + std::string(name) + " is an empty path");
            (name != "RUN" ? options.plan : i == 0 ? options.run : options.run_after) = operands[i];
        }
        return {};
    }

    std::vector<std::string> given_for(const OptionSpec& option) const {
        if (option.argument.empty()) {
            return std::vector<std::string>(flags.at(option.name) > 0 ? 1 : 0);
        }
        return values.at(option.name);
    }

    const CommandSpec* spec;
    CLI::App* parser = nullptr;
    std::map<std::string_view, std::vector<std::string>> values;  // nodes stay where CLI11 points to
    std::map<std::string_view, int> flags;
};

}  // namespace

Outcome<std::variant<Options, Answer>> parse_command_line(const std::vector<std::string>& arguments,
                                                          std::string_view tool_version) {
    using Parsed = std::variant<Options, Answer>;
    if (arguments.empty()) return Parsed(Answer{Stream::err, short_usage(), exit_status_of(usage_error(""))});
    // Nobody who asks for help should first have to get the rest right.
    for (const std::string& argument : arguments) {
        if (argument == "--") break;
        if (argument == "-h" || argument == "--help") return Parsed(Answer{Stream::out, full_help(), 0});
        if (argument == "--version")
            return Parsed(Answer{Stream::out, "halflsb " + std::string(tool_version) + "\n", 0});
    }
    const auto options_end = check_values(arguments);
    if (!options_end) return options_end.error();
    const auto end = arguments.begin() + static_cast<std::ptrdiff_t>(*options_end);
    const std::vector<std::string> behind(end == arguments.end() ? end : end + 1, arguments.end());

    CLI::App app;
    app.set_help_flag();
    app.allow_extras();
    app.require_subcommand(0, 1);
    std::vector<std::unique_ptr<CommandParser>> parsers;
    for (const CommandSpec& spec : command_table()) parsers.push_back(std::make_unique<CommandParser>(app, spec));
    try {
        std::vector<std::string> reversed(std::make_reverse_iterator(end), arguments.rend());
        app.parse(std::move(reversed));
    } catch (const CLI::ParseError& error) {
        return usage_error(printable(error.what()));
    }
    const auto used = std::find_if(parsers.begin(), parsers.end(), [](const auto& p) { return p->parser->parsed(); });
    // What stands before the command belongs to none.
    if (const std::vector<std::string> stray = app.remaining(); !stray.empty())
        return unexpected(stray.front(), nullptr);
    if (used == parsers.end()) return unknown_command(arguments.front());
    const CommandParser& command = **used;
    return command.options(behind);
}

}  // namespace halflsb
