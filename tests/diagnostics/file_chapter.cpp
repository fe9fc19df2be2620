// What reading and writing on a real disk can run into.
#include <sys/stat.h>
#include <unistd.h>

#include <array>
#include <cstdlib>
#include <filesystem>

#include "runner/config/firmware_image.hpp"
#include "runner/record/run_folder.hpp"
#include "runner/world/files.hpp"
#include "runner/world/sha256.hpp"
#include "tests/diagnostics/workshop.hpp"

namespace halflsb::diagnostics {

namespace {

namespace fs = std::filesystem;

constexpr std::size_t cap = 1 << 20;

void show_reading(Page& page, const Workshop& workshop, DiskFiles& files) {
    page.show("a file that is not there", files.read("none.txt", cap));
    page.show("a folder for a file", files.read("root", cap));
    page.show("a pipe for a file", files.read("root/pipe", cap));
    page.show("a device for a file", files.read("/dev/null", cap));
    page.show("a file below a file", files.read("secret.txt/x", cap));
    page.show("links that lead in a circle", files.read("root/loop.txt", cap));
    page.show("a file above its cap", files.read("secret.txt", 1));
    page.show("a file that grows beyond its cap", files.read("/proc/self/maps", 10));
    page.show("a file that the system does not let read", files.read("/proc/self/mem", cap));
    const std::string endless(5000, 'x');
    page.show("a name that is too long", replaced(to_text(files.read(endless, cap).error()), {{endless, "xxx..."}}));
    workshop.write("shrinks.npy", "0123456789");
    const auto input = files.open_input("shrinks.npy");
    fs::resize_file("shrinks.npy", 4);
    std::array<std::byte, 10> bytes{};
    if (input) page.show("a file that is cut while it is read", (*input)->read(0, bytes));
}

void show_root(Page& page, DiskFiles& files) {
    const auto named = [&](std::string_view done, const std::string& path, const std::string& root = "root") {
        const auto read = files.read_under_root(root, path, cap);
        page.show(done,
                  read ? std::string() : replaced(to_text(read.error()), {{fs::canonical(".").string(), "/work"}}));
    };
    named("a plan names a file above the root", "../secret.txt");
    named("a plan names an absolute path", "/etc/hostname");
    named("a plan names a link out of the root", "out.txt");
    named("a plan names a folder", "inner");
    named("a plan names the root", "inner/..");
    named("a plan names nothing", "");
    named("a plan names a path with a NUL", std::string("a\0b", 3));
    named("a plan names a file that is not there", "none.txt");
    named("--root is no folder", "taps.txt", "nowhere");
}

void show_writing(Page& page, DiskFiles& files) {
    page.show("a result in place of a folder", files.open_output("root"));
    page.show("a result in a folder that is gone", files.open_output("nowhere/run.json"));
    page.show("a result below a file", files.open_output("secret.txt/run.json"));
    fs::create_symlink("secret.txt", "linked.part");
    page.show("a result that is a link", files.open_output("linked"));
    std::array<std::byte, 16> bytes{};
    if (auto file = files.open_output("short")) page.show("a result that was cut", (*file)->read_back(0, bytes));
    page.show("a capture that is gone when its hash is taken", sha256_of_file("gone.npy"));
    const auto opened = [&](std::string_view done, const std::string& out) {
        page.show(done, open_run_folder(files, {"2026-12-01T09:30:00Z", "cw7.toml", out}));
    };
    opened("--out is not empty", "root");
    opened("--out is a file", "secret.txt");
    opened("--out without a name", "");
    for (int i = 1; i <= 1000; ++i)
        fs::create_directories(".halflsb/20261201T093000Z-cw7" + (i == 1 ? std::string() : "-" + std::to_string(i)));
    page.show("a thousand runs in one second", open_run_folder(files, {"2026-12-01T09:30:00Z", "cw7.toml", {}}));
}

/// What somebody without special rights sees.
void show_rights(Page& page, const Workshop& workshop, DiskFiles& files) {
    constexpr fs::perms for_reading =
        fs::perms::owner_read | fs::perms::owner_exec | fs::perms::others_read | fs::perms::others_exec;
    fs::permissions(".", for_reading | fs::perms::owner_write);
    workshop.write("closed.txt", "1\n");
    fs::permissions("closed.txt", fs::perms::none);
    fs::create_directory("closed");
    fs::permissions("closed", fs::perms::none);
    fs::permissions(".halflsb", for_reading);
    const bool was_root = geteuid() == 0;
    constexpr uid_t nobody = 65534;
    // Theirs, so that it is the same when the tests do not run as root.
    for (const char* path : {".", "closed.txt", "closed", ".halflsb"}) {
        if (was_root && chown(path, nobody, nobody) != 0) return page.missing("a file of somebody else");
    }
    if (was_root && seteuid(nobody) != 0) return page.missing("a file that may not be read");
    page.show("a file that may not be read", files.read("closed.txt", cap));
    page.show("a result that may not be written", files.open_output("closed/run.json"));
    page.show("--out may not be looked into", open_run_folder(files, {"2026-12-01T09:30:00Z", "cw7.toml", "closed"}));
    page.show("no right to make the folder of a run",
              open_run_folder(files, {"2026-12-01T09:30:00Z", "other.toml", {}}));
    if (was_root && seteuid(0) != 0) std::abort();
    fs::permissions("closed", fs::perms::owner_all);
    fs::permissions(".halflsb", fs::perms::owner_all);
}

void show_images(Page& page, const Workshop& workshop, DiskFiles& files) {
    const auto image = [&](std::string_view done, const std::string& bytes) {
        workshop.write("cw7.elf", bytes);
        page.show(done, read_build_id("cw7.elf", files));
    };
    image("--image is no ELF file", "no program");
    std::string elf =
        "\x7f"
        "ELF\x01\x01";
    image("--image is cut in its first bytes", elf);
    elf.resize(52, '\0');
    image("--image without a build-id", elf);
    elf[29] = 1;   // a program header 256 bytes into the file,
    elf[42] = 32;  // of entries of 32 bytes,
    elf[44] = 1;   // of which there is one
    image("--image is cut in its tables", elf);
}

}  // namespace

void file_chapter(Page& page) {
    const Workshop workshop;
    fs::create_directories("root/inner");
    workshop.write("root/taps.txt", "0.25\n");
    workshop.write("secret.txt", "1\n");
    fs::create_symlink("../secret.txt", "root/out.txt");
    fs::create_symlink("loop.txt", "root/loop.txt");
    mkfifo("root/pipe", 0600);
    DiskFiles files;
    page.chapter("Files that are read");
    show_reading(page, workshop, files);
    page.chapter("Files that a plan names");
    show_root(page, files);
    page.chapter("Files that are written");
    show_writing(page, files);
    show_rights(page, workshop, files);
    page.chapter("The image of the firmware");
    show_images(page, workshop, files);
}

}  // namespace halflsb::diagnostics
