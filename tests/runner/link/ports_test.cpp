#include "runner/link/ports.hpp"

#include <algorithm>
#include <catch2/catch.hpp>

using namespace halflsb;

namespace {

PortInfo usb(std::string device, int vendor, int product, std::string serial) {
    PortInfo info;
    info.device = std::move(device);
    info.usb_vendor = vendor;
    info.usb_product = product;
    info.usb_serial = std::move(serial);
    info.stable_name = stable_name(vendor, product, info.usb_serial);
    return info;
}

const std::vector<PortInfo> bench_ports{
    PortInfo{"/dev/ttyS0", "", "ttyS0", -1, -1, ""}, usb("/dev/ttyUSB0", 0x0403, 0x6001, "A50285BI"),
    usb("/dev/ttyUSB1", 0x0403, 0x6001, "B7"), usb("/dev/ttyACM0", 0x0483, 0x374B, "")};

std::string device_or_text(std::string_view name, const std::vector<PortInfo>& ports = bench_ports) {
    const Outcome<std::string> device = find_device(name, ports);
    return device ? *device : to_text(device.error());
}

}  // namespace

TEST_CASE("ports: this machine can be asked, and pseudo-terminals are not among the ports", "[link]") {
    const Outcome<std::vector<PortInfo>> ports = list_ports();
    REQUIRE(ports);
    for (const PortInfo& port : *ports) {
        CHECK(port.device.rfind("/dev/", 0) == 0);
        CHECK(port.device.rfind("/dev/pts", 0) != 0);
    }
    CHECK(std::is_sorted(ports->begin(), ports->end(),
                         [](const PortInfo& a, const PortInfo& b) { return comes_before(a.device, b.device); }));
}

TEST_CASE("ports: numbers in names count as numbers", "[link]") {
    CHECK(comes_before("ttyUSB2", "ttyUSB10"));
    CHECK_FALSE(comes_before("ttyUSB10", "ttyUSB2"));
    CHECK_FALSE(comes_before("ttyUSB2", "ttyUSB2"));
    CHECK(comes_before("ttyACM9", "ttyUSB0"));
    CHECK(comes_before("ttyUSB", "ttyUSB0"));
    CHECK(comes_before("a1b2", "a1b10"));
    CHECK(comes_before("a1", "a01b"));
    CHECK(comes_before("99999999999999999998", "99999999999999999999"));
}

TEST_CASE("ports: stable names, there and back", "[link]") {
    CHECK(stable_name(0x403, 0x6001, "") == "usb:0403:6001");
    CHECK(stable_name(0x403, 0x6001, "A5:7") == "usb:0403:6001:A5:7");
    const auto name = parse_usb_name("usb:0483:374b:A5:7");
    REQUIRE(name);
    REQUIRE(name->has_value());
    CHECK((*name)->vendor == 0x483);
    CHECK((*name)->product == 0x374B);
    CHECK((*name)->serial == "A5:7");
    const auto path = parse_usb_name("/dev/ttyUSB0");
    REQUIRE(path);
    CHECK_FALSE(path->has_value());
}

TEST_CASE("ports: a stable name finds its port whatever number it has", "[link]") {
    CHECK(device_or_text("usb:0403:6001:B7") == "/dev/ttyUSB1");
    CHECK(device_or_text("usb:0483:374b") == "/dev/ttyACM0");
    CHECK(device_or_text("usb:0483:374B") == "/dev/ttyACM0");
    CHECK(device_or_text("/dev/anything") == "/dev/anything");
}

TEST_CASE("ports: what cannot be found says what is there", "[link]") {
    CHECK(device_or_text("usb:1234:5678") ==
          "usb:1234:5678: no such port; the ports seen: /dev/ttyS0, /dev/ttyUSB0 (usb:0403:6001:A50285BI), "
          "/dev/ttyUSB1 (usb:0403:6001:B7), /dev/ttyACM0 (usb:0483:374b)\n"
          "  correct port in the rig, or plug the board in; halflsb ports lists the ports");
    CHECK(device_or_text("usb:1234:5678", {}) ==
          "usb:1234:5678: no such port; this machine has no serial port now\n"
          "  plug the board in, and check the cable: some carry power only");
    CHECK(device_or_text("usb:0403:6001") ==
          "usb:0403:6001: more than one port has this name: /dev/ttyUSB0 (usb:0403:6001:A50285BI), /dev/ttyUSB1 "
          "(usb:0403:6001:B7)\n"
          "  add the serial number to port in the rig: usb:VID:PID:SERIAL");
}

TEST_CASE("ports: malformed stable names are an input error", "[link]") {
    for (const char* name : {"usb:", "usb:0403", "usb:403:6001", "usb:0403-6001", "usb:0403:60g1", "usb:0403:60011",
                             "usb:0403:6001:", "usb:0403:6001X", "usb:+403:6001", "usb: 403:6001"}) {
        const Outcome<std::string> device = find_device(name, bench_ports);
        INFO(name);
        REQUIRE_FALSE(device);
        CHECK(device.error().kind == ErrorKind::input);
        CHECK(to_text(device.error()) ==
              std::string(name) + ": \"" + name +
                  "\" is not a stable name of a serial port\n"
                  "  write usb:VID:PID or usb:VID:PID:SERIAL with four hex digits each, as in usb:0403:6001; "
                  "halflsb ports lists them");
    }
}
