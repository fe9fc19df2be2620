#include "runner/config/rig_file.hpp"

#include <algorithm>

#include "runner/config/document.hpp"
#include "runner/config/reader.hpp"
#include "runner/config/rig_words.hpp"

namespace halflsb {

namespace {

constexpr std::string_view isolated_remedy =
    "disconnect actuators, mains, patients and loads; then write isolated = true below [board]";

/// Words of design that this version does not know yet: told from a slip of the pen.
void refuse_later_word(TableReader& reader, std::string_view key, const std::vector<std::string_view>& later,
                       std::string_view now, std::vector<std::string_view>& said) {
    const TomlEntry* entry = reader.entry(key);
    if (entry == nullptr || entry->value.kind != TomlValue::Kind::text) return;
    if (std::find(later.begin(), later.end(), entry->value.text) == later.end()) return;
    reader.refuse(entry->value.place, std::string(key) + " = \"" + entry->value.text + "\" is not in this version",
                  "write " + std::string(key) + " = \"" + std::string(now) + "\"");
    said.push_back(key);
}

/// The recipe without words about which something better was said.
Recipe without(const Recipe& recipe, const std::vector<std::string_view>& words) {
    Recipe rest = recipe;
    std::erase_if(rest.parameters,
                  [&](const Parameter& p) { return std::find(words.begin(), words.end(), p.name) != words.end(); });
    return rest;
}

void read_board(ReadContext& context, TableReader& top, Rig& rig) {
    const TomlValue* table = top.table("board", true);
    if (table == nullptr) return;
    TableReader reader(context, *table, "[board]", &top);
    const ParameterValues values = reader.parameters(board_recipe());
    rig.name = values.text(board_recipe(), "name").value_or("");
    const TomlEntry* isolated = reader.entry(isolated_word);
    if (isolated == nullptr) {
        reader.refuse(reader.place(),
                      "[board] does not say isolated = true: a stimulus can move what is wired to the board",
                      isolated_remedy);
    } else if (isolated->value.kind != TomlValue::Kind::boolean) {
        reader.refuse(isolated->value.place, "isolated is " + kind_text(isolated->value) + ", wanted true",
                      isolated_remedy);
    } else if (!isolated->value.boolean) {
        reader.refuse(isolated->value.place,
                      "isolated = false: a stimulus can move what is wired to the board, so nothing is streamed",
                      isolated_remedy);
    }
    reader.refuse_unknown_keys();
}

bool is_hex(std::string_view text) {
    return !text.empty() && text.find_first_not_of("0123456789abcdefABCDEF") == std::string_view::npos;
}

bool is_port(std::string_view port) {
    constexpr std::string_view usb = "usb:";
    if (!port.starts_with(usb)) return true;
    port.remove_prefix(usb.size());
    const std::size_t colon = port.find(':');
    if (colon == std::string_view::npos) return false;
    const std::string_view product_and_serial = port.substr(colon + 1);
    const std::string_view product = product_and_serial.substr(0, product_and_serial.find(':'));
    const bool has_empty_serial = product_and_serial.size() == product.size() + 1;
    return colon == 4 && is_hex(port.substr(0, colon)) && product.size() == 4 && is_hex(product) && !has_empty_serial;
}

void read_link(ReadContext& context, TableReader& top, Rig& rig) {
    const TomlValue* table = top.table("link", true);
    if (table == nullptr) return;
    TableReader reader(context, *table, "[link]", &top);
    std::vector<std::string_view> said;
    refuse_later_word(reader, "use", {"tcp", "rfc2217", "process"}, "serial", said);
    const ParameterValues values = reader.parameters(without(link_recipe(), said));
    reader.refuse_unknown_keys();
    rig.port = values.text(link_recipe(), "port").value_or("");
    if (!is_port(rig.port)) {
        reader.refuse(reader.place_of("port"), "port = " + quoted(rig.port) + " is no name of a USB port",
                      "write usb:VID:PID or usb:VID:PID:SERIAL with four hex digits each, as in "
                      "usb:0403:6001; halflsb ports lists them");
    }
    if (rig.port.starts_with("./")) rig.port = rig.folder + rig.port.substr(1);
    rig.baud = static_cast<long>(values.integer(link_recipe(), "baud").value_or(0));
}

void read_wire(ReadContext& context, TableReader& top, Rig& rig) {
    const TomlValue* table = top.table("wire", true);
    if (table == nullptr) return;
    TableReader reader(context, *table, "[wire]", &top);
    std::vector<std::string_view> said;
    refuse_later_word(reader, "form", {"raw", "lines", "log"}, "framed", said);
    const ParameterValues values = reader.parameters(without(wire_recipe(), said));
    reader.refuse_unknown_keys();
    rig.block_samples = static_cast<int>(values.integer(wire_recipe(), "block_samples").value_or(0));
    rig.answer_s = values.number(wire_recipe(), "answer_s").value_or(0.0);
    rig.greet_s = values.number(wire_recipe(), "greet_s").value_or(0.0);
}

void read_run(ReadContext& context, TableReader& top, Rig& rig) {
    const TomlValue* table = top.table("run", false);
    if (table == nullptr) return;
    TableReader reader(context, *table, "[run]", &top);
    const ParameterValues values = reader.parameters(run_recipe());
    reader.refuse_unknown_keys();
    rig.attempts = static_cast<int>(*values.integer(run_recipe(), "attempts"));
}

/// The first word in braces that is not {image}; "" when there is none.
std::string_view unknown_brace_word(std::string_view argument) {
    for (std::size_t open = argument.find('{'); open != std::string_view::npos; open = argument.find('{', open + 1)) {
        const std::size_t close = argument.find('}', open);
        if (close == std::string_view::npos) return {};
        const std::string_view word = argument.substr(open, close - open + 1);
        if (word != image_word) return word;
    }
    return {};
}

std::vector<std::string> read_arguments(TableReader& reader, const TomlValue& list) {
    constexpr std::string_view how =
        "write before_run = [[\"./flash.sh\", \"{image}\"]]: a list of commands, each a list of strings";
    std::vector<std::string> arguments;
    if (list.kind != TomlValue::Kind::array) {
        reader.refuse(list.place, "in before_run stands " + kind_text(list) + ", wanted a list of arguments", how);
        return arguments;
    }
    if (list.items.empty()) reader.refuse(list.place, "a command without arguments", how);
    for (const TomlValue& item : list.items) {
        if (item.kind != TomlValue::Kind::text) {
            reader.refuse(item.place, "an argument is " + kind_text(item) + ", wanted a string", how);
            continue;
        }
        if (item.text.find('\0') != std::string::npos) {
            reader.refuse(item.place, "an argument holds a NUL", "no program can be given one");
        } else if (arguments.empty() && item.text.empty()) {
            reader.refuse(item.place, "the name of the command is empty", how);
        } else if (const auto word = unknown_brace_word(item.text); !word.empty()) {
            reader.refuse(item.place, "nothing replaces " + quoted(word), "only {image} is known: the file of --image");
        }
        arguments.push_back(item.text);
    }
    return arguments;
}

void read_commands(ReadContext& context, TableReader& top, Rig& rig) {
    rig.before_run_limit_s = *ParameterValues{}.number(commands_recipe(), "before_run_limit_s");
    const TomlValue* table = top.table("commands", false);
    if (table == nullptr) return;
    TableReader reader(context, *table, "[commands]", &top);
    const ParameterValues values = reader.parameters(commands_recipe());
    rig.before_run_limit_s = values.number(commands_recipe(), "before_run_limit_s").value_or(0.0);
    if (const TomlEntry* entry = reader.entry(before_run_word)) {
        if (entry->value.kind == TomlValue::Kind::array) {
            for (const TomlValue& list : entry->value.items) rig.before_run.push_back(read_arguments(reader, list));
        } else {
            reader.refuse(entry->value.place,
                          "before_run is " + kind_text(entry->value) + ", wanted a list of commands",
                          "write before_run = [[\"./flash.sh\", \"{image}\"]]; there is no shell");
        }
    }
    reader.refuse_unknown_keys();
}

}  // namespace

std::variant<Rig, ReadProblems> read_rig(const std::string& path, const Files& files) {
    auto opened = open_document(path, files, "docs/rig.md");
    if (auto* failed = std::get_if<ReadProblems>(&opened)) return std::move(*failed);
    const Document& document = std::get<Document>(opened);
    Problems problems(document.source);
    Rig rig;
    rig.file = path;
    rig.folder = folder_of(path);
    ReadContext context{problems, files, rig.folder, std::nullopt, {}};
    TableReader top(context, document.tree, "");
    for (const std::string_view key : {"board", "link", "wire", "run", "commands"}) top.entry(key);
    read_board(context, top, rig);
    read_link(context, top, rig);
    read_wire(context, top, rig);
    read_run(context, top, rig);
    read_commands(context, top, rig);
    top.refuse_unknown_keys();
    if (problems.count() > 0) return problems.sorted();
    return rig;
}

std::vector<std::string> with_image(const std::vector<std::string>& arguments, const std::string& image) {
    std::vector<std::string> replaced = arguments;
    for (std::string& argument : replaced) {
        for (std::size_t at = argument.find(image_word); at != std::string::npos;
             at = argument.find(image_word, at + image.size())) {
            argument.replace(at, image_word.size(), image);
        }
    }
    return replaced;
}

bool wants_image(const Rig& rig) {
    return std::any_of(rig.before_run.begin(), rig.before_run.end(), [](const std::vector<std::string>& arguments) {
        return std::any_of(arguments.begin(), arguments.end(),
                           [](const std::string& a) { return a.find(image_word) != std::string::npos; });
    });
}

}  // namespace halflsb
