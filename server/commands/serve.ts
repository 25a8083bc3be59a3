import { Command } from "commander";
import { readPlantConfig } from "../config/plant-config.ts";
import { caution } from "../gateway/plant-view.ts";
import { startService } from "../service.ts";
import { untilStopped } from "./until-stopped.ts";

/** `serve --config plant.json`: the service. */
export function serveCommand(): Command {
  return new Command("serve")
    .description("run the service for a plant")
    .requiredOption("--config <file>", "the plant's configuration")
    .action(async ({ config: file }: { config: string }) => {
      const config = readPlantConfig(file);
      await untilStopped(async (stopWith) => {
        const service = await startService(config, { died: stopWith });
        console.log(`Millrace for ${config.name}: ${service.url}`);
        console.log(
          `readings by MQTT at ${service.brokerUrl}, topic ${config.mqtt.prefix}/${config.site}/<stream>/reading`,
        );
        console.log(caution);
        return () => service.stop();
      });
    });
}
