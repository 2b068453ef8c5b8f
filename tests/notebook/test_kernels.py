"""Kernels as front ends start them: several at once, many restarts, outputs out of hand, and the stock tslab kernel."""

import os
import time
import unittest
import uuid

from jupyter_client.manager import start_new_kernel


def run(client, code, timeout=60):
    """Runs a cell. Gives the reply's content and the cell's outputs."""
    outputs = []
    reply = client.execute_interactive(code, timeout=timeout, allow_stdin=False, output_hook=outputs.append)
    return reply["content"], [message for message in outputs if message["msg_type"] not in ("status", "execute_input")]


# Every process that a kernel of this test starts inherits this mark, also when it outlives the one that started it.
mark = f"WEDGEWORK_TEST_MARK={uuid.uuid4()}"
os.environ.update([mark.split("=")])


def processes():
    """Command lines of all processes that this test's kernels consist of."""
    found = {}
    for entry in os.listdir("/proc"):
        if entry.isdigit() and int(entry) != os.getpid():
            try:
                with open(f"/proc/{entry}/environ", "rb") as environment, open(f"/proc/{entry}/cmdline", "rb") as line:
                    if mark.encode() in environment.read():
                        found[int(entry)] = line.read().replace(b"\0", b" ").decode(errors="replace")
            except OSError:
                continue
    return found


def wait_until(condition, seconds):
    end = time.monotonic() + seconds
    while time.monotonic() < end:
        if condition():
            return True
        time.sleep(0.1)
    return condition()


class KernelTests(unittest.TestCase):
    def test_two_kernels_do_not_disturb_each_other(self):
        first, second = start_new_kernel(kernel_name="wedgework"), start_new_kernel(kernel_name="wedgework")
        try:
            run(first[1], "const mine = 'first';")
            run(second[1], "const mine = 'second';")
            second[1].execute("while (true) {}")
            reply, outputs = run(first[1], "mine")
            self.assertEqual(outputs[0]["content"]["data"]["text/plain"], "'first'")
            second[0].interrupt_kernel()
            self.assertEqual(second[1].get_shell_msg(timeout=10)["content"]["ename"], "Interrupted")
            reply, outputs = run(second[1], "mine")
            self.assertEqual(outputs[-1]["content"]["data"]["text/plain"], "'second'")
        finally:
            for manager, client in (first, second):
                client.stop_channels()
                manager.shutdown_kernel()

    def test_200_restarts_leak_no_process(self):
        before = set(processes())
        manager, client = start_new_kernel(kernel_name="wedgework")
        try:
            for _ in range(200):
                manager.restart_kernel(now=False)
                client.wait_for_ready(timeout=60)
            reply, outputs = run(client, "6 * 7")
            self.assertEqual(outputs[0]["content"]["data"]["text/plain"], "42")
            # The kernel and its engine.
            self.assertTrue(wait_until(lambda: len(set(processes()) - before) == 2, 20), processes())
        finally:
            client.stop_channels()
            manager.shutdown_kernel()
        self.assertTrue(wait_until(lambda: not set(processes()) - before, 20), processes())

    def test_a_killed_kernel_takes_its_engine_with_it(self):
        before = set(processes())
        manager, client = start_new_kernel(kernel_name="wedgework")
        client.execute("while (true) {}")
        time.sleep(1)
        client.stop_channels()
        manager.shutdown_kernel(now=True)
        self.assertTrue(wait_until(lambda: not set(processes()) - before, 20), processes())

    def test_a_cell_that_ends_its_process_is_told(self):
        manager, client = start_new_kernel(kernel_name="wedgework")
        try:
            reply, outputs = run(client, "process.exit(3)")
            self.assertEqual((reply["status"], reply["ename"]), ("error", "KernelEnded"))
            self.assertTrue(wait_until(lambda: not manager.is_alive(), 20))
        finally:
            client.stop_channels()
            manager.shutdown_kernel(now=True)

    def test_outputs_out_of_hand_are_cut(self):
        manager, client = start_new_kernel(kernel_name="wedgework")
        try:
            # A gigabyte in a thousand pieces.
            reply, outputs = run(client, "const piece = 'x'.repeat(1e6);\nfor (let i = 0; i < 1000; i++) process.stdout.write(piece);", timeout=120)
            self.assertEqual(reply["status"], "ok")
            printed = "".join(message["content"]["text"] for message in outputs if message["content"].get("name") == "stdout")
            self.assertEqual(len(printed), 1_000_000)
            self.assertIn("Output cut: 999,000,000 more characters", outputs[-1]["content"]["text"])
            # A cell of a megabyte.
            reply, outputs = run(client, f"const long = '{'y' * 1_000_000}';\nlong.length")
            self.assertEqual(outputs[0]["content"]["data"]["text/plain"], "1000000")
            # A frame of 10,000 columns.
            frame = "import * as dfd from 'danfojs-node';\nnew dfd.DataFrame([Array.from({ length: 10000 }, (_, i) => i)])"
            reply, outputs = run(client, frame)
            self.assertIn("40 of 10001 columns shown.", outputs[-1]["content"]["data"]["text/plain"])
            reply, outputs = run(client, "1")
            self.assertEqual(reply["status"], "ok")
        finally:
            client.stop_channels()
            manager.shutdown_kernel()

    def test_stock_tslab_shows_through_show(self):
        manager, client = start_new_kernel(kernel_name="tslab")
        try:
            code = "import * as ww from 'wedgework';\nawait ww.show(ww.suiteOf({ columns: [ww.column({ symbol: 'SiO2', values: [52.1] })] }));"
            reply, outputs = run(client, code)
            self.assertEqual(reply["status"], "ok")
            shown = [message["content"]["data"] for message in outputs if message["msg_type"] == "display_data"]
            self.assertEqual(sorted(shown[0]), ["text/html", "text/markdown", "text/plain"])
            reply, outputs = run(client, "const { progress } = ww.progress('Counting'); progress(1, 2); progress(2, 2);")
            kinds = [message["msg_type"] for message in outputs]
            self.assertEqual(kinds, ["display_data", "update_display_data"])
        finally:
            client.stop_channels()
            manager.shutdown_kernel()


if __name__ == "__main__":
    unittest.main(verbosity=2)
