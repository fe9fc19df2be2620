#include "runner/world/files.hpp"

#include <fcntl.h>
#include <sys/mount.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <unistd.h>

#include <catch2/catch.hpp>
#include <fstream>

#include "tests/support/temporary_folder.hpp"

using namespace halflsb;

namespace {

constexpr std::size_t cap = 1000;

void put(const std::string& path, const std::string& bytes) { std::ofstream(path, std::ios::binary) << bytes; }

std::string get(const std::string& path) {
    std::ifstream file(path, std::ios::binary);
    return {std::istreambuf_iterator<char>(file), {}};
}

std::span<const std::byte> bytes_of(const std::string& text) { return std::as_bytes(std::span(text)); }

/// Runs `body` as an ordinary user, whom permissions hold, and returns what it returned.
int as_ordinary_user(int (*body)(const std::string&), const std::string& path) {
    const pid_t child = fork();
    if (child == 0) {
        constexpr uid_t nobody = 65534;
        if (geteuid() == 0 && (setgid(nobody) != 0 || setuid(nobody) != 0)) _exit(99);
        _exit(body(path));
    }
    int status = 0;
    waitpid(child, &status, 0);
    return WIFEXITED(status) ? WEXITSTATUS(status) : 98;
}

}  // namespace

TEST_CASE("files: a regular file is read whole, up to and including its cap", "[files]") {
    const TemporaryFolder folder;
    const DiskFiles files;
    const std::string bytes("a\0b\r\n\xff", 6);
    put(folder / "f", bytes);
    REQUIRE(files.read(folder / "f", cap));
    CHECK(files.read(folder / "f", cap).value() == bytes);
    CHECK(files.read(folder / "f", 6).value() == bytes);
    const auto larger = files.read(folder / "f", 5);
    REQUIRE(!larger);
    CHECK(to_text(larger.error()) ==
          folder / "f" + ": it has 6 bytes, the most allowed are 5; it was not read\n  is it the file that was meant?");
    put(folder / "empty", "");
    CHECK(files.read(folder / "empty", cap).value().empty());
}

TEST_CASE("files: what is no readable regular file is refused with the reason, and nothing hangs", "[files]") {
    const TemporaryFolder folder;
    const DiskFiles files;
    const auto problem = [&](const std::string& path) {
        const auto read = files.read(path, cap);
        REQUIRE(!read);
        CHECK(read.error().kind == ErrorKind::input);
        CHECK(read.error().place == path);
        CHECK(!read.error().remedy.empty());
        return read.error().problem;
    };
    CHECK(problem(folder / "missing") == "there is no such file");
    CHECK(problem(folder.path()) == "it is a folder, not a regular file");
    CHECK(problem("/dev/zero") == "it is a device, not a regular file");
    REQUIRE(mkfifo((folder / "pipe").c_str(), 0600) == 0);
    CHECK(problem(folder / "pipe") == "it is a pipe, not a regular file");
    REQUIRE(symlink("circle", (folder / "circle").c_str()) == 0);
    CHECK(problem(folder / "circle") == "its symbolic links lead in a circle");
    put(folder / "f", "x");
    CHECK(problem(folder / "f/below") == "a part of the path is not a folder");
    CHECK(problem(folder / std::string(300, 'x')) == "the path is too long");
}

TEST_CASE("files: a file that may not be read is refused, for an ordinary user", "[files]") {
    const TemporaryFolder folder;
    REQUIRE(chmod(folder.path().c_str(), 0755) == 0);
    put(folder / "secret", "x");
    REQUIRE(chmod((folder / "secret").c_str(), 0) == 0);
    const int result = as_ordinary_user(
        [](const std::string& path) {
            const auto read = DiskFiles().read(path, cap);
            return !read && read.error().problem == "no permission to read it" ? 0 : 1;
        },
        folder / "secret");
    CHECK(result == 0);
}

TEST_CASE("files: a file without a stated size is still capped", "[files]") {
    // /proc states a size of 0 for files that have content.
    const auto read = DiskFiles().read("/proc/self/status", 10);
    REQUIRE(!read);
    CHECK(read.error().problem == "it has more than the 10 bytes allowed");
}

TEST_CASE("files: under a root, links are followed as long as they stay inside", "[files]") {
    const TemporaryFolder folder;
    const DiskFiles files;
    const std::string root = folder / "root";
    REQUIRE(mkdir(root.c_str(), 0700) == 0);
    REQUIRE(mkdir((root + "/sub").c_str(), 0700) == 0);
    put(root + "/taps.txt", "1\n");
    put(root + "/sub/more.txt", "2\n");
    put(folder / "outside.txt", "3\n");
    REQUIRE(symlink("sub/more.txt", (root + "/inner").c_str()) == 0);
    REQUIRE(symlink((root + "/taps.txt").c_str(), (root + "/sub/absolute").c_str()) == 0);
    REQUIRE(symlink("../outside.txt", (root + "/outer").c_str()) == 0);
    REQUIRE(symlink("..", (root + "/up").c_str()) == 0);
    REQUIRE(symlink(root.c_str(), (folder / "root-link").c_str()) == 0);

    const auto read = [&](const std::string& path) { return files.read_under_root(root, path, cap); };
    CHECK(read("taps.txt").value() == "1\n");
    CHECK(read("sub/more.txt").value() == "2\n");
    CHECK(read("./sub/../taps.txt").value() == "1\n");
    CHECK(read("inner").value() == "2\n");
    CHECK(read("sub/absolute").value() == "1\n");
    CHECK(files.read_under_root(folder / "root-link", "taps.txt", cap).value() == "1\n");
    CHECK(files.read_under_root("/", root.substr(1) + "/taps.txt", cap).value() == "1\n");

    const auto problem = [&](const std::string& path) {
        const auto refused = read(path);
        REQUIRE(!refused);
        CHECK(refused.error().kind == ErrorKind::input);
        CHECK(!refused.error().remedy.empty());
        return refused.error().problem;
    };
    const std::string outside = "it lies outside the root " + root + ", at " + folder / "outside.txt";
    CHECK(problem("../outside.txt") == "it lies outside the root " + root);
    CHECK(problem("../missing.txt") == "it lies outside the root " + root);
    CHECK(problem("sub/./../../root/taps.txt") == "it lies outside the root " + root);
    CHECK(problem("outer") == outside);
    CHECK(problem("up/outside.txt") == outside);
    CHECK(problem("sub/../../outside.txt") == "it lies outside the root " + root);
    CHECK(problem(folder / "outside.txt") == "the path is absolute");
    CHECK(problem(root + "/taps.txt") == "the path is absolute");
    CHECK(problem("") == "the path is empty");
    CHECK(problem(std::string("taps.txt\0", 9)) == "the path holds a NUL");
    CHECK(problem(".") == "it is a folder, not a regular file");
    CHECK(problem("sub/..") == "it is a folder, not a regular file");
    CHECK(problem("sub") == "it is a folder, not a regular file");
    CHECK(problem("missing") == "there is no such file");
    put(root + "/large", std::string(cap + 1, 'x'));
    CHECK(problem("large") == "it has 1001 bytes, the most allowed are 1000; it was not read");
    REQUIRE(mkfifo((root + "/pipe").c_str(), 0600) == 0);
    CHECK(problem("pipe") == "it is a pipe, not a regular file");
    REQUIRE(symlink("/dev/zero", (root + "/device").c_str()) == 0);
    CHECK(problem("device") == "it lies outside the root " + root + ", at /dev/zero");
    CHECK(files.read_under_root(folder / "no-root", "f", cap).error().problem == "there is no such folder");
}

TEST_CASE("files: a root whose name begins another folder's name does not contain it", "[files]") {
    const TemporaryFolder folder;
    REQUIRE(mkdir((folder / "root").c_str(), 0700) == 0);
    REQUIRE(mkdir((folder / "root-two").c_str(), 0700) == 0);
    put(folder / "root-two/f", "x");
    CHECK(!DiskFiles().read_under_root(folder / "root", "../root-two/f", cap));
}

TEST_CASE("files: a write replaces the whole file and leaves nothing beside it", "[files]") {
    const TemporaryFolder folder;
    DiskFiles files;
    put(folder / "f", "an older and longer content");
    put(folder / "f.part", "left by a crash");
    REQUIRE(files.write(folder / "f", std::string("new")));
    CHECK(get(folder / "f") == "new");
    CHECK(!files.exists(folder / "f.part"));
    REQUIRE(files.write(folder / "empty", std::string()));
    CHECK(files.exists(folder / "empty"));
}

TEST_CASE("files: a part that is a link is not written through", "[files]") {
    const TemporaryFolder folder;
    DiskFiles files;
    put(folder / "victim", "kept");
    REQUIRE(symlink("victim", (folder / "f.part").c_str()) == 0);
    CHECK(!files.write(folder / "f", std::string("new")));
    CHECK(get(folder / "victim") == "kept");
}

TEST_CASE("files: an output file is invisible until it is committed", "[files]") {
    const TemporaryFolder folder;
    DiskFiles files;
    put(folder / "f", "old");
    {
        auto file = files.open_output(folder / "f");
        REQUIRE(file);
        REQUIRE((*file)->write(bytes_of("....abc")));
        REQUIRE((*file)->write(bytes_of("def")));
        REQUIRE((*file)->patch_start(bytes_of("HEAD")));
        REQUIRE((*file)->write(bytes_of("ghi")));
        std::string back(5, ' ');
        REQUIRE((*file)->read_back(5, std::as_writable_bytes(std::span(back))));
        CHECK(back == "bcdef");
        std::string beyond(9, ' ');
        CHECK(!(*file)->read_back(5, std::as_writable_bytes(std::span(beyond))));
        CHECK(get(folder / "f") == "old");
        REQUIRE((*file)->commit());
        CHECK(get(folder / "f") == "HEADabcdefghi");
    }
    CHECK(get(folder / "f") == "HEADabcdefghi");
    CHECK(!files.exists(folder / "f.part"));
    {
        auto file = files.open_output(folder / "f");
        REQUIRE((*file)->write(bytes_of("half")));
        CHECK(files.exists(folder / "f.part"));
    }
    CHECK(!files.exists(folder / "f.part"));
    CHECK(get(folder / "f") == "HEADabcdefghi");
}

TEST_CASE("files: a growing file may take another name in the end", "[files]") {
    const TemporaryFolder folder;
    DiskFiles files;
    put(folder / "f", "old");
    {
        auto file = files.open_output(folder / "f");
        REQUIRE(file);
        REQUIRE((*file)->write(bytes_of("new")));
        (*file)->rename(folder / "f.attempt-1");
        CHECK(files.exists(folder / "f.part"));
        REQUIRE((*file)->commit());
    }
    CHECK(get(folder / "f.attempt-1") == "new");
    CHECK(get(folder / "f") == "old");
    CHECK(!files.exists(folder / "f.part"));
    {
        auto file = files.open_output(folder / "f");
        REQUIRE(file);
        (*file)->rename(folder / "g");
    }
    CHECK(!files.exists(folder / "f.part"));
    CHECK(!files.exists(folder / "g"));
}

TEST_CASE("files: folders are made with those above them, existing ones are fine", "[files]") {
    const TemporaryFolder folder;
    DiskFiles files;
    REQUIRE(files.make_directories(folder / "a/b/c"));
    REQUIRE(files.make_directories(folder / "a/b/c"));
    REQUIRE(files.make_directories(folder / "a/b/d/"));
    CHECK(files.exists(folder / "a/b/d"));
    put(folder / "file", "x");
    const auto refused = files.make_directories(folder / "file/below");
    REQUIRE(!refused);
    CHECK(refused.error().kind == ErrorKind::output);
    CHECK(refused.error().problem == "a part of the path is not a folder");
}

TEST_CASE("files: what cannot be written says why and what to do", "[files]") {
    const TemporaryFolder folder;
    DiskFiles files;
    REQUIRE(mkdir((folder / "taken").c_str(), 0700) == 0);
    const auto taken = files.write(folder / "taken", std::string("x"));
    REQUIRE(!taken);
    CHECK(taken.error().kind == ErrorKind::output);
    CHECK(to_text(taken.error()) ==
          folder / "taken" + ": there is a folder of that name\n  choose another folder with --out");
    CHECK(files.write(folder / "missing/f", std::string("x")).error().problem == "the folder it belongs in is gone");

    REQUIRE(chmod(folder.path().c_str(), 0555) == 0);
    const int result = as_ordinary_user(
        [](const std::string& path) {
            DiskFiles mine;
            const auto file = mine.write(path, std::string("x"));
            const auto made = mine.make_directories(path);
            const bool right = !file && file.error().problem == "no permission to write it" &&
                               file.error().kind == ErrorKind::output && !made &&
                               made.error().problem == "no permission to write it";
            return right ? 0 : 1;
        },
        folder / "f");
    REQUIRE(chmod(folder.path().c_str(), 0755) == 0);
    CHECK(result == 0);
}

TEST_CASE("files: a full disk is named, at the write or at the commit", "[files]") {
    const TemporaryFolder folder;
    DiskFiles files;
    if (geteuid() != 0) return;  // a small file system can be mounted by root alone; the system tests use one
    const std::string small = folder / "small";
    REQUIRE(mkdir(small.c_str(), 0700) == 0);
    if (mount("none", small.c_str(), "tmpfs", 0, "size=16k") != 0) {
        WARN("no right to mount a small file system here; the system tests use one");
        return;
    }
    const auto refused = files.write(small + "/f", std::string(100000, 'x'));
    const bool left = files.exists(small + "/f") || files.exists(small + "/f.part");
    const bool remounted = mount("none", small.c_str(), "tmpfs", MS_REMOUNT | MS_RDONLY, nullptr) == 0;
    const auto read_only = files.write(small + "/g", std::string("x"));
    umount2(small.c_str(), MNT_DETACH);
    REQUIRE(!refused);
    CHECK(refused.error().kind == ErrorKind::output);
    CHECK(refused.error().problem == "no space is left on its disk");
    CHECK(!left);
    REQUIRE(remounted);
    REQUIRE(!read_only);
    CHECK(read_only.error().problem == "its file system is read-only");
}
