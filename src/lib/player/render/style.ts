/**
 * The player's style sheet as a string: Pack puts it into the page and names it by its hash in the policy. Dim, large
 * and calm, for a control room with the lights down.
 */
export const PLAYER_CSS = `
*{box-sizing:border-box}
html{color-scheme:dark}
html,body{height:100%}
body{margin:0;background:#0c1214;color:#dfe7e4;font:20px/1.45 "Atkinson Hyperlegible",system-ui,sans-serif;font-variant-numeric:tabular-nums}
#root,.player{height:100%}
.player canvas{position:fixed;inset:0;width:100vw;height:100vh;display:block}
.player.running{cursor:none}
.player [hidden]{display:none!important}
.screen{position:fixed;inset:0;overflow:auto;background:#0c1214;display:grid;grid-template-rows:auto auto 1fr auto}
.mark{height:10px;background:repeating-linear-gradient(135deg,#f0916a 0 14px,#0c1214 14px 28px)}
.mark.none{background:none}
.screen>header{display:flex;flex-wrap:wrap;gap:4px 34px;padding:26px 44px 0;color:#93a2a4;font-size:18px}
.screen>header b{color:#dfe7e4}
.screen>header .kind{margin-left:auto;text-align:right}
.screen>main{display:grid;grid-template-columns:1.25fr 1fr;gap:32px 60px;padding:24px 44px;align-items:center}
.screen>main.one{grid-template-columns:minmax(0,44em);align-content:center}
.screen h1{font-size:58px;line-height:1.1;margin:0 0 18px;font-weight:700;text-wrap:balance}
.screen h1 i{font-style:normal;color:#63c6b6;display:block}
.screen h1.alarm i{color:#f0916a}
.screen h2{font-size:24px;margin:0 0 8px}
.screen p{margin:0 0 14px;max-width:30em}
.soft,.screen small{color:#93a2a4;font-size:17px}
.screen small{display:block}
.list{margin:0;padding:0;list-style:none}
.list li{display:grid;grid-template-columns:26px 1fr auto;gap:14px;padding:11px 0;border-bottom:1px solid #202b2f;font-size:18px}
.list li:before{content:"";width:14px;height:14px;border-radius:50%;background:#63c6b6;align-self:center}
.list li.amber:before{background:none;border:3px solid #e0b35a;border-radius:2px}
.list li.red:before{background:#f0916a;border-radius:0;clip-path:polygon(50% 0,100% 100%,0 100%)}
.list li.waits:before{background:none;border:2px dashed #93a2a4}
.list li.plain{grid-template-columns:1fr auto}
.list li.plain:before{display:none}
.list span{color:#93a2a4;text-align:right}
kbd{border:2px solid #4a5b60;border-radius:6px;padding:2px 12px;font:inherit}
.screen>footer{padding:0 44px 34px;color:#93a2a4;font-size:18px;display:flex;flex-wrap:wrap;gap:14px 44px}
.screen>footer .last{margin-left:auto}
.pulses{display:flex;gap:10px;margin:26px 0 8px}
.pulses i{width:34px;height:8px;border-radius:4px;background:#202b2f}
.pulses i.on{background:#f0916a}
.field{display:grid;gap:2px}
.field label{color:#93a2a4;font-size:18px}
input,select,button{font:inherit;color:inherit;background:#161f22;border:2px solid #6d7c80;border-radius:5px;padding:8px 14px}
input[type=checkbox]{width:24px;height:24px;margin:0 12px 0 0;accent-color:#63c6b6;vertical-align:-5px}
.field input,.field select{width:100%;max-width:22em}
.pair{display:grid;grid-template-columns:1fr 1fr;gap:0 24px}
button{cursor:pointer;min-height:44px}
button.main{background:#63c6b6;border-color:#63c6b6;color:#0c1214;font-weight:700}
button:disabled{opacity:.45;cursor:default}
.buttons{display:flex;flex-wrap:wrap;gap:14px;margin:18px 0 0}
.error{color:#f0916a;margin:0 0 14px;max-width:30em}
.error:empty{display:none}
:focus-visible{outline:3px solid #8fbdf5;outline-offset:3px}
.page{position:fixed;inset:0;overflow:auto;background:#000;color:#dfe7e4;display:grid;place-content:center;justify-items:center;padding:6vh 8vw;text-align:center;font-size:30px}
.page p{margin:0 0 1em;max-width:26em;white-space:pre-line}
.page.flip-x{transform:scaleX(-1)}
.page.flip-y{transform:scaleY(-1)}
.page.flip-x.flip-y{transform:scale(-1,-1)}
.page .soft{font-size:20px}
@media (max-width:1100px){.screen h1{font-size:44px}.screen>main{grid-template-columns:1fr;align-content:start;gap:24px}}
@media (max-height:820px){.screen h1{font-size:44px}.list li{padding:8px 0}}
`;
