return await Pipeline.Commands.CommandLine.Run(args).ConfigureAwait(false);
