"""Jupyter's own conformance suite (jupyter_kernel_test) on the installed kernel.

Two of its tests do not apply and are skipped: test_pager (the kernel pages nothing) and test_clear_output (nothing in the kernel or the
library sends one; displays are updated in place instead).
"""

import time
import unittest

import jupyter_kernel_test
from jupyter_kernel_test import msgspec_v5


class ConformanceTests(jupyter_kernel_test.KernelTests):
    kernel_name = "wedgework"
    language_name = "typescript"
    file_extension = ".ts"

    code_hello_world = "console.log('hello, world')"
    code_stderr = "console.error('oops')"
    completion_samples = [
        {"text": "ww.suiteO", "matches": {"suiteOf"}},
        {"text": "Math.sqr", "matches": {"sqrt", "SQRT2", "SQRT1_2"}},
    ]
    complete_code_samples = ["1 + 1", "const a = 1;", "function f() { return 1; }", "await Promise.resolve(1)"]
    incomplete_code_samples = ["function f() {", "const a = [1,", "if (true) {"]
    invalid_code_samples = []
    code_generate_error = "throw new RangeError('no such column')"
    code_execute_result = [
        {"code": "1 + 2 + 3", "result": "6"},
        {"code": "await Promise.resolve('late')", "result": "'late'"},
    ]
    code_display_data = [
        {"code": "await ww.show(ww.suiteOf({ columns: [] }))", "mime": "text/html"},
    ]
    supported_history_operations = ("tail", "range", "search")
    code_history_pattern = "1 ? 2*"
    code_inspect_sample = "ww.suiteOf"

    def finish(self, code, **options):
        self.flush_channels()
        return self.execute_helper(code=code, timeout=30, **options)

    def test_inspection_carries_doc_comments(self):
        msg_id = self.kc.inspect("ww.molarMass(", 13)
        reply = self.get_non_kernel_info_reply(timeout=15)
        self.assertEqual(reply["parent_header"]["msg_id"], msg_id)
        self.assertTrue(reply["content"]["found"])
        self.assertIn("Molar mass", reply["content"]["data"]["text/plain"])
        self.assertIn("```typescript", reply["content"]["data"]["text/markdown"])

    def test_error_has_the_users_lines(self):
        reply, outputs = self.finish("const a = 1;\nconst b = a;\nthrow new RangeError('no such column');")
        self.assertEqual(reply["content"]["status"], "error")
        errors = [message["content"] for message in outputs if message["msg_type"] == "error"]
        self.assertEqual([error["ename"] for error in errors], ["RangeError"])
        self.assertIn("line 3", errors[0]["traceback"][1])
        self.assertEqual(errors[0]["traceback"], reply["content"]["traceback"])

    def test_cells_sent_with_a_failing_one_are_aborted(self):
        self.flush_channels()
        first = self.kc.execute("throw new Error('stop')")
        second = self.kc.execute("globalThis.mustNotRun = true")
        replies = {}
        while len(replies) < 2:
            reply = self.get_non_kernel_info_reply(timeout=15)
            replies[reply["parent_header"]["msg_id"]] = reply["content"]["status"]
        self.assertEqual(replies, {first: "error", second: "aborted"})
        reply, outputs = self.finish("String((globalThis as any).mustNotRun)")
        self.assertEqual(outputs[0]["content"]["data"]["text/plain"], "'undefined'")

    def test_cells_sent_after_a_failing_one_run_when_asked(self):
        self.flush_channels()
        self.kc.execute("throw new Error('go on')", stop_on_error=False)
        second = self.kc.execute("1")
        for _ in range(2):
            reply = self.get_non_kernel_info_reply(timeout=15)
        self.assertEqual((reply["parent_header"]["msg_id"], reply["content"]["status"]), (second, "ok"))

    def test_interrupt_leaves_the_variables(self):
        self.finish("const kept = 41;")
        for loop in ("while (true) {}", "await null; while (true) {}", "while (true) await null;", "await new Promise(() => {})"):
            with self.subTest(loop):
                self.flush_channels()
                self.kc.execute(loop)
                time.sleep(0.5)
                start = time.monotonic()
                self.km.interrupt_kernel()
                reply = self.get_non_kernel_info_reply(timeout=10)
                self.assertLess(time.monotonic() - start, 1.0)
                self.assertEqual((reply["content"]["status"], reply["content"]["ename"]), ("error", "Interrupted"))
                reply, outputs = self.finish("kept + 1")
                self.assertEqual(outputs[0]["content"]["data"]["text/plain"], "42")

    def test_interrupt_by_message(self):
        self.flush_channels()
        self.kc.execute("while (true) {}")
        time.sleep(0.5)
        self.kc.control_channel.send(self.kc.session.msg("interrupt_request", {}))
        reply = self.get_non_kernel_info_reply(timeout=10)
        self.assertEqual(reply["content"]["ename"], "Interrupted")

    def test_silent_code_shows_nothing_and_counts_nothing(self):
        reply, _ = self.finish("1")
        count = reply["content"]["execution_count"]
        self.flush_channels()
        self.kc.execute("console.log('hidden'); 2", silent=True)
        reply = self.get_non_kernel_info_reply(timeout=15)
        self.assertEqual((reply["content"]["status"], reply["content"]["execution_count"]), ("ok", count))
        while True:
            message = self.kc.get_iopub_msg(timeout=15)
            self.assertEqual(message["msg_type"], "status")
            if message["content"]["execution_state"] == "idle":
                break

    def test_display_is_updated_in_place(self):
        reply, outputs = self.finish("const { progress } = ww.progress('Counting');\nprogress(1, 2);\nprogress(2, 2);")
        kinds = [message["msg_type"] for message in outputs]
        self.assertEqual(kinds, ["display_data", "update_display_data"])
        ids = {message["content"]["transient"]["display_id"] for message in outputs}
        self.assertEqual(len(ids), 1)

    def test_keyboard_input_is_refused(self):
        reply, _ = self.finish("process.stdin.read()")
        self.assertEqual(reply["content"]["status"], "error")
        self.assertIn("keyboard", reply["content"]["evalue"])

    def test_cursor_counts_characters(self):
        code = "const volcano = '🌋'; Math.sq"
        self.kc.complete(code, len(code))
        reply = self.get_non_kernel_info_reply(timeout=15)
        content = reply["content"]
        self.assertIn("sqrt", content["matches"])
        self.assertEqual(code[content["cursor_start"] : content["cursor_end"]], "sq")

    def test_unknown_request_is_answered(self):
        self.flush_channels()
        self.kc.shell_channel.send(self.kc.session.msg("wishful_request", {}))
        reply = self.get_non_kernel_info_reply(timeout=15)
        self.assertEqual(reply["content"]["status"], "error")

    def test_every_message_follows_the_specification(self):
        self.flush_channels()
        self.kc.execute("console.log(1); 2")
        reply = self.get_non_kernel_info_reply(timeout=15)
        msgspec_v5.validate_message(reply, "execute_reply", reply["parent_header"]["msg_id"])


if __name__ == "__main__":
    unittest.main(verbosity=2)
