import { contractSuite } from "#test/contract/contract-suite.ts";
import { bareHandler, loopbackServer } from "#test/contract/shells.ts";

contractSuite("the bare handler", bareHandler);
contractSuite("the loopback server", loopbackServer);
