#include "runner/cli/options.hpp"

#include <catch2/catch.hpp>
#include <iterator>
#include <set>

#include "runner/cli/exit_status.hpp"
#include "runner/cli/help.hpp"
#include "tests/support/generated_part.hpp"

using namespace halflsb;

namespace {

using Words = std::vector<std::string>;

Options options_of(const Words& words) {
    const auto parsed = parse_command_line(words, "0.1.0");
    REQUIRE(parsed);
    REQUIRE(std::holds_alternative<Options>(*parsed));
    return std::get<Options>(*parsed);
}

Answer answer_of(const Words& words) {
    const auto parsed = parse_command_line(words, "0.1.0");
    REQUIRE(parsed);
    REQUIRE(std::holds_alternative<Answer>(*parsed));
    return std::get<Answer>(*parsed);
}

std::string error_of(const Words& words) {
    const auto parsed = parse_command_line(words, "0.1.0");
    REQUIRE_FALSE(parsed);
    CHECK(parsed.error().kind == ErrorKind::usage);
    CHECK(exit_status_of(parsed.error()) == 64);
    return to_text(parsed.error());
}

Words with(Words words, const Words& more) {
    words.insert(words.end(), more.begin(), more.end());
    return words;
}

const Words check_both{"check", "cw7.toml", "--rig", "bench.toml"};
const std::string hint = "\n  halflsb --help shows every command and option";
const std::string example = "\n  for example: halflsb check cw7.toml --rig bench.toml";

}  // namespace

TEST_CASE("options: check with its operand and rig, everything else as it is without options", "[cli]") {
    const Options options = options_of(check_both);
    CHECK(options.command == Command::check);
    CHECK(options.plan == "cw7.toml");
    CHECK(options.rigs == Words{"bench.toml"});
    CHECK(options.case_patterns.empty());
    CHECK_FALSE(options.seed);
    CHECK_FALSE(options.image);
    CHECK_FALSE(options.out);
    CHECK_FALSE(options.root);
    CHECK_FALSE(options.verbose);
    CHECK_FALSE(options.log_file);
    CHECK(options.colour == ColourWish::automatic);
}

TEST_CASE("options: every option reaches its field, in any order, with blank or equals sign", "[cli]") {
    const Options options = options_of({"check", "--case", "tare step", "--seed=9007199254740991", "-v",
                                        "--rig=r=1.toml", "plan.toml", "--case=mains*", "--image", "cw7.elf", "--out",
                                        "o", "--root", "..", "--log", "l.txt", "--color", "always"});
    CHECK(options.plan == "plan.toml");
    CHECK(options.rigs == Words{"r=1.toml"});
    CHECK(options.case_patterns == Words{"tare step", "mains*"});
    CHECK(options.seed == 9007199254740991u);
    CHECK(options.image == "cw7.elf");
    CHECK(options.out == "o");
    CHECK(options.root == "..");
    CHECK(options.verbose);
    CHECK(options.log_file == "l.txt");
    CHECK(options.colour == ColourWish::always);
    CHECK(options_of(with(check_both, {"--color", "never"})).colour == ColourWish::never);
    CHECK(options_of(with(check_both, {"--seed", "0"})).seed == 0u);
}

TEST_CASE("options: predict needs no rig, ports nothing", "[cli]") {
    CHECK(options_of({"predict", "p"}).command == Command::predict);
    CHECK(options_of({"predict", "p", "--rig", "r", "--case", "c", "--root", "d"}).rigs == Words{"r"});
    CHECK(options_of({"ports", "--verbose"}).command == Command::ports);
}

TEST_CASE("options: judge takes a run and perhaps a plan, accept a run, check several rigs", "[cli]") {
    const Options judge = options_of({"judge", "out/run", "--case", "a", "other.toml", "--label", "quick", "--json"});
    CHECK(judge.command == Command::judge);
    CHECK(judge.run == "out/run");
    CHECK(judge.plan == "other.toml");
    CHECK(judge.labels == Words{"quick"});
    CHECK(judge.json);
    CHECK(options_of({"judge", "out/run"}).plan.empty());
    const Options compare = options_of({"compare", "out/old", "out/new", "--for", "5min"});
    CHECK(compare.run == "out/old");
    CHECK(compare.run_after == "out/new");
    CHECK(compare.time_limit_s == 300.0);
    CHECK(options_of({"explain", "out/run", "--rig", "a"}).rigs == Words{"a"});
    const Options accept = options_of({"accept", "out/run", "--samples", "1073741824", "--root", "."});
    CHECK(accept.run == "out/run");
    CHECK(accept.kept_samples == 1073741824);
    CHECK(options_of({"check", "p", "--rig", "a", "--rig=b"}).rigs == Words{"a", "b"});
    CHECK(options_of({"check", "p", "--list"}).list);
    CHECK(options_of({"check", "p", "--list"}).rigs.empty());
}

TEST_CASE("options: a double dash ends them, and what follows is an operand whatever it looks like", "[cli]") {
    CHECK(options_of({"predict", "--", "--help"}).plan == "--help");
    CHECK(options_of({"predict", "--rig", "r", "--", "-p.toml"}).plan == "-p.toml");
    CHECK(options_of({"predict", "p", "--"}).plan == "p");
    const Options judge = options_of({"judge", "run", "--", "--json"});
    CHECK(judge.plan == "--json");
    CHECK_FALSE(judge.json);
    CHECK(options_of({"judge", "--", "--", "-"}).run == "--");
    CHECK(error_of({"predict", "p", "--", "q"}) == "'q' is one operand too many\n  predict takes one PLAN");
    CHECK(error_of({"predict", "p", "--rig", "--"}) == "--rig needs a value\n  write --rig RIG");
    CHECK(error_of({"predict", "--"}) ==
          "predict needs a PLAN\n  for example: halflsb predict cw7.toml --rig bench.toml");
    // A plan may be called as a command is.
    CHECK(options_of({"predict", "check"}).plan == "check");
}

TEST_CASE("options: without arguments a short usage on standard error, status 64", "[cli]") {
    const Answer answer = answer_of({});
    CHECK(answer.stream == Stream::err);
    CHECK(answer.exit_status == 64);
    CHECK(answer.text ==
          "usage: halflsb check PLAN --rig RIG\n"
          "       halflsb judge RUN [PLAN]\n"
          "       halflsb explain RUN\n"
          "       halflsb compare RUN RUN\n"
          "       halflsb accept RUN\n"
          "       halflsb predict PLAN\n"
          "       halflsb ports\n"
          "       halflsb --help\n"
          "example: halflsb check cw7.toml --rig bench.toml\n");
}

TEST_CASE("options: -h and --help give the same full text on standard output, wherever they stand", "[cli]") {
    for (const Words& words :
         {Words{"-h"}, {"--help"}, {"check", "--help"}, {"check", "p", "--nonsense", "-h"}, {"ports", "-h"}}) {
        const Answer answer = answer_of(words);
        CHECK(answer.stream == Stream::out);
        CHECK(answer.exit_status == 0);
        CHECK(answer.text == full_help());
    }
}

TEST_CASE("options: --version is one line on standard output", "[cli]") {
    CHECK(answer_of({"--version"}).text == "halflsb 0.1.0\n");
    CHECK(answer_of({"check", "--version"}).text == "halflsb 0.1.0\n");
    CHECK(answer_of({"--version"}).stream == Stream::out);
    CHECK(answer_of({"--version"}).exit_status == 0);
}

TEST_CASE("options: an unknown word is answered with the nearest known one", "[cli]") {
    CHECK(error_of({"chekc", "p"}) == "there is no command 'chekc'\n  did you mean 'check'?");
    CHECK(error_of({"frobnicate"}) == "there is no command 'frobnicate'" + hint);
    CHECK(error_of({"check", "p", "--rgi", "r"}) == "there is no option '--rgi'\n  did you mean --rig?");
    CHECK(error_of({"check", "p", "--colour=never"}) == "there is no option '--colour'\n  did you mean --color?");
    CHECK(error_of({"--verison"}) == "there is no option '--verison'\n  did you mean --version?");
    CHECK(error_of(with(check_both, {"-q"})) == "there is no option '-q'" + hint);
    CHECK(error_of(with(check_both, {"-rig"})) == "there is no option '-rig'\n  did you mean --rig?");
    // No abbreviations: they would change their meaning with the next option that is added.
    CHECK(error_of({"check", "p", "--ri", "r"}) == "there is no option '--ri'\n  did you mean --rig?");
    CHECK(error_of({"che", "p"}) == "there is no command 'che'" + hint);
    CHECK(error_of({"x\x1b[2J"}) == "there is no command 'x\\x1b[2J'" + hint);
}

TEST_CASE("options: an option in the wrong place says where it belongs", "[cli]") {
    CHECK(error_of({"predict", "p", "--image", "f"}) == "--image is not an option of predict\n  it belongs to check");
    CHECK(error_of({"ports", "--case=x"}) == "--case is not an option of ports\n  it belongs to check, judge, explain, compare, predict");
    CHECK(error_of({"--rig", "r", "check", "p"}) == "--rig stands before the command\n  write it behind the command");
}

TEST_CASE("options: what is missing is named with an example", "[cli]") {
    CHECK(error_of({"check"}) == "check needs a PLAN" + example);
    CHECK(error_of({"check", "p"}) == "check needs --rig RIG" + example);
    CHECK(error_of({"check", "p", "--rig"}) == "--rig needs a value\n  write --rig RIG");
    CHECK(error_of({"check", "p", "--rig="}) == "--rig needs a value\n  write --rig RIG");
    CHECK(error_of({"check", "p", "--rig", "--case", "c"}) == "--rig needs a value\n  write --rig RIG");
}

TEST_CASE("options: what is too much or out of range is quoted", "[cli]") {
    CHECK(error_of(with(check_both, {"other.toml"})) == "'other.toml' is one operand too many\n  check takes one PLAN");
    CHECK(error_of({"ports", "x"}) == "'x' is one operand too many\n  ports takes none");
    CHECK(error_of({"predict", "p", "--rig", "r", "--rig", "s"}) == "--rig is given 2 times\n  give it once");
    CHECK(error_of({"judge", "run", "plan", "third"}) ==
          "'third' is one operand too many\n  judge takes one RUN and at most one PLAN");
    CHECK(error_of({"compare", "old", "new", "third"}) ==
          "'third' is one operand too many\n  compare takes a RUN and a second RUN");
    CHECK(error_of({"compare", "old"}) ==
          "compare needs a second RUN\n  for example: halflsb compare .halflsb/20261201T093000Z-cw7 "
          ".halflsb/20261203T101500Z-cw7");
    CHECK(error_of({"judge", "run", ""}) == "the PLAN is an empty path" + hint);
    for (const std::string samples : {"0", "-1", "1.5", "1073741825", "many"}) {
        CHECK(error_of({"accept", "run", "--samples", samples}) ==
              "--samples: '" + samples + "' is not a whole number from 1 to 1073741824" + hint);
    }
    CHECK(error_of(with(check_both, {"--verbose=3"})) == "--verbose takes no value\n  leave out what follows it");
    for (const std::string seed : {"-5", "1.5", "0x10", "9007199254740992", "18446744073709551616", " 1", "1 "}) {
        CHECK(error_of(with(check_both, {"--seed", seed})) ==
              "--seed: '" + seed + "' is not a whole number from 0 to 9007199254740991" + hint);
    }
    CHECK(error_of(with(check_both, {"--color", "blue"})) ==
          "--color: 'blue' is not one of auto, always, never" + hint);
    CHECK(error_of(with(check_both, {"--case", ""})) == "--case: the name is empty" + hint);
    CHECK(error_of(with(check_both, {"--out", ""})) == "--out: the path is empty" + hint);
}

TEST_CASE("options: the table is whole", "[cli]") {
    std::set<std::string_view> names;
    for (const OptionSpec& option : option_table()) {
        INFO(option.name);
        CHECK(names.insert(option.name).second);
        CHECK(option.name.substr(0, 2) == "--");
        CHECK_FALSE(option.help.empty());
        CHECK(option.help.back() != '.');
        CHECK_FALSE(option.commands.empty());
        CHECK(option.take != nullptr);
        for (const Command needing : option.needed_by) {
            CHECK(std::find(option.commands.begin(), option.commands.end(), needing) != option.commands.end());
        }
    }
}

TEST_CASE("options: the parser knows exactly the options of the table, per command", "[cli]") {
    for (const CommandSpec& command : command_table()) {
        for (const OptionSpec& option : option_table()) {
            INFO(command.name << " " << option.name);
            Words words{std::string(command.name)};
            if (!command.operand.empty()) words.push_back("p");
            if (!command.second.empty()) words.push_back("q");
            const bool needs_rig = command.command == Command::check && option.name != "--rig";
            if (needs_rig) words = with(words, {"--rig", "r"});
            words.emplace_back(option.name);
            if (!option.argument.empty()) words.push_back(option.name == "--color" ? "auto" : "1");
            const bool known =
                std::find(option.commands.begin(), option.commands.end(), command.command) != option.commands.end();
            CHECK(static_cast<bool>(parse_command_line(words, "")) == known);
        }
    }
}

TEST_CASE("help: holds every command, option, status and example, in 80 columns", "[cli]") {
    const std::string help = full_help();
    for (const CommandSpec& command : command_table()) {
        CHECK(help.find("\n  " + std::string(command.name) + " ") != std::string::npos);
        CHECK(help.find("\n  " + std::string(command.example) + "\n") != std::string::npos);
        // What an example says must be true: it parses.
        Words words;
        for (std::size_t at = std::string("halflsb ").size(); at < command.example.size();) {
            const std::size_t end = std::min(command.example.find(' ', at), command.example.size());
            words.emplace_back(command.example.substr(at, end - at));
            at = end + 1;
        }
        CHECK(parse_command_line(words, ""));
    }
    for (const OptionSpec& option : option_table()) CHECK(help.find(option.name) != std::string::npos);
    for (const ExitStatus& status : exit_statuses())
        CHECK(help.find(std::string(status.meaning).substr(0, 40)) != std::string::npos);
    CHECK(help.find("disconnect actuators") != std::string::npos);
    for (std::size_t at = 0; at < help.size();) {
        const std::size_t end = help.find('\n', at);
        REQUIRE(end != std::string::npos);
        CHECK(end - at <= 80);
        at = end + 1;
    }
}

TEST_CASE("help: docs/command.md holds the reference of the tables", "[cli][docs]") {
    test::check_generated_part("command.md", "commands", command_reference());
}
